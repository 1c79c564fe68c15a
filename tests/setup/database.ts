import { inject } from 'vitest';
import { cloneDatabase, type TestDatabase } from './clone-database.ts';

export type { TestDatabase };

/** For integration tests: call it in `beforeAll`, `drop()` in `afterAll`; one per test file. */
export function createTestDatabase(): Promise<TestDatabase> {
  return cloneDatabase(inject('testCluster'));
}

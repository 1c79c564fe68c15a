import { openDatabase } from '../../server/lib/database.ts';
import type { Deps } from '../../server/lib/deps.ts';
import { readEnv } from '../../server/lib/env.ts';
import { openLog } from '../../server/lib/log.ts';
import { openSessions } from '../../server/features/accounts/sessions.ts';
import { createTestDatabase, type TestDatabase } from '../setup/database.ts';

export interface TestDeps extends Deps {
  testDatabase: TestDatabase;
  /** Closes the pools and drops the database. */
  close(): Promise<void>;
}

/** What the app and the jobs are built from, on a database of its own, connected as the application role. */
export async function openTestDeps(): Promise<TestDeps> {
  const testDatabase = await createTestDatabase();
  const database = openDatabase(testDatabase.applicationUrl, { poolSize: 6 });
  const env = readEnv({ DATABASE_URL: testDatabase.applicationUrl, NODE_ENV: 'test', LOG_LEVEL: 'silent' });
  return {
    testDatabase,
    database,
    env,
    log: openLog('silent'),
    close: async () => {
      await database.close();
      await testDatabase.drop();
    },
  };
}

/** Cookie header of a fresh session, to be sent with `.set('cookie', …)`. */
export async function signIn({ database }: Deps, person: { id: number }): Promise<string> {
  return `fairweek=${await openSessions(database).open(person.id)}`;
}

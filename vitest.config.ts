import { defineConfig } from 'vitest/config';

const setupFiles = ['tests/setup/unexpected-console-errors.ts'];

/**
 * Three projects: `unit` (no database, no browser), `unit-client` (components in jsdom) and `integration` (real PostgreSQL; each test file
 * works on its own copy of one migrated database).
 */
export default defineConfig({
  test: {
    allowOnly: false,
    passWithNoTests: false,
    projects: [
      {
        extends: true,
        test: {
          name: 'unit',
          include: ['tests/**/*.test.{ts,tsx}'],
          exclude: ['tests/integration/**', 'tests/src/**'],
          environment: 'node',
          setupFiles,
        },
      },
      {
        extends: true,
        test: {
          name: 'unit-client',
          include: ['tests/src/**/*.test.{ts,tsx}'],
          environment: 'jsdom',
          setupFiles: [...setupFiles, 'tests/setup/client.ts'],
        },
      },
      {
        extends: true,
        test: {
          name: 'integration',
          include: ['tests/integration/**/*.test.{ts,tsx}'],
          environment: 'node',
          globalSetup: ['tests/setup/template-database.ts'],
          setupFiles,
          pool: 'forks',
          maxWorkers: 2,
          testTimeout: 60_000,
          hookTimeout: 120_000,
        },
      },
    ],
  },
});

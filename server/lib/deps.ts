import type { Database } from './database.ts';
import type { Env } from './env.ts';
import type { Log } from './log.ts';

/** What every router is built from; real ones in main and in tests. */
export interface Deps {
  database: Database;
  env: Env;
  log: Log;
}

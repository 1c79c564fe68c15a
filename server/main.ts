import { buildApp } from './app.ts';
import { openDatabase } from './lib/database.ts';
import { readEnv } from './lib/env.ts';
import { openLog } from './lib/log.ts';

/** The web process: serves API and client until it is told to stop, then finishes what is in flight. */
const env = readEnv();
const log = openLog(env.logLevel);
const database = openDatabase(env.databaseUrl);
const server = buildApp({ database, env, log }).listen(env.port, env.host, (error) => {
  if (error) {
    log.fatal({ err: error }, 'can’t listen');
    process.exit(1);
  }
  log.info({ port: env.port, host: env.host }, 'serving');
});

let isStopping = false;
function stop(): void {
  if (isStopping) return;
  isStopping = true;
  server.close(() => {
    void database.close().finally(() => process.exit(0));
  });
  server.closeIdleConnections();
  setTimeout(() => {
    server.closeAllConnections();
  }, 8_000).unref();
}
process.on('SIGTERM', stop);
process.on('SIGINT', stop);

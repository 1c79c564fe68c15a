import { run } from 'graphile-worker';
import { z } from 'zod';
import { loadActor } from './features/accounts/accounts.service.ts';
import { runJob } from './features/jobs/jobs.service.ts';
import { jobHandlers } from './job-handlers.ts';
import { openDatabase } from './lib/database.ts';
import { readEnv } from './lib/env.ts';
import { openLog } from './lib/log.ts';

/** The background process: takes jobs from the queue in the database. Several may run, on several machines. */
const env = readEnv();
const log = openLog(env.logLevel);
const database = openDatabase(env.databaseUrl);
const JobPayload = z.object({ jobId: z.number().int() });

const runner = await run({
  pgPool: database.pool,
  concurrency: 2,
  noHandleSignals: true,
  pollInterval: 2_000,
  taskList: {
    'run-job': async (payload, { job }) => {
      const { jobId } = JobPayload.parse(payload);
      await runJob({ database, log, handlers: jobHandlers, loadActor }, jobId, job.attempts >= job.max_attempts);
    },
  },
});
log.info('worker ready');

let isStopping = false;
async function stop(): Promise<void> {
  if (isStopping) return;
  isStopping = true;
  await runner.stop();
  await database.close();
  process.exit(0);
}
process.on('SIGTERM', () => void stop());
process.on('SIGINT', () => void stop());
await runner.promise;

import { run } from 'graphile-worker';
import { z } from 'zod';
import { loadActor } from './features/accounts/accounts.service.ts';
import { runJob, type JobHandler, type JobKind } from './features/jobs/jobs.service.ts';
import { buildPackJob } from './features/packs/packs.jobs.ts';
import { forecastCategoryJob } from './features/plan/plan.jobs.ts';
import { acceptImportJob, readImportJob, withdrawImportJob } from './features/sales/sales.jobs.ts';
import { openDatabase } from './lib/database.ts';
import { readEnv } from './lib/env.ts';
import { openLog } from './lib/log.ts';

const handlers: Readonly<Record<JobKind, JobHandler>> = {
  'import.read': readImportJob,
  'import.accept': acceptImportJob,
  'import.withdraw': withdrawImportJob,
  'forecast.category': forecastCategoryJob,
  'pack.build': buildPackJob,
};

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
      await runJob({ database, log, handlers, loadActor }, jobId, job.attempts >= job.max_attempts);
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

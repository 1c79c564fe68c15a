import { loadActor } from '../../server/features/accounts/accounts.service.ts';
import { runJob, type JobHandler, type JobKind } from '../../server/features/jobs/jobs.service.ts';
import type { Deps } from '../../server/lib/deps.ts';

/**
 * Runs what is queued, oldest first, until nothing is left, as the worker does but in this process. Only the given kinds have handlers.
 * Returns the ids of the jobs run.
 */
export async function runQueuedJobs(
  { database, log }: Deps,
  handlers: Partial<Readonly<Record<JobKind, JobHandler>>>,
): Promise<number[]> {
  const ran: number[] = [];
  for (;;) {
    const { rows } = await database.pool.query<{ id: number }>(
      `select id from job where state = 'queued' order by id limit 1`,
    );
    const id = rows[0]?.id;
    if (id === undefined) return ran;
    await runJob({ database, log, handlers: handlers as Readonly<Record<JobKind, JobHandler>>, loadActor }, id, true);
    ran.push(id);
  }
}

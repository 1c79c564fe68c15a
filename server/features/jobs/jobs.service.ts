import type { Job } from '../../../shared/contracts/jobs.ts';
import { demandRight, type Actor } from '../../lib/authorise.ts';
import { inTransaction, type Database, type Tx } from '../../lib/database.ts';
import type { Log } from '../../lib/log.ts';
import { ProblemError } from '../../lib/problem.ts';
import * as repository from './jobs.repository.ts';

export type JobKind = Job['kind'];

/** What a handler works with. `report` is cheap to call often: it writes at most a few times a second. */
export interface JobContext {
  database: Database;
  log: Log;
  jobId: number;
  actor: Actor;
  payload: Record<string, unknown>;
  report: (progress: number, message: NonNullable<Job['message']>) => Promise<void>;
}

/** Does the work and returns what the job made. A ProblemError it throws is told to the person; it isn't tried again. */
export type JobHandler = (context: JobContext) => Promise<Record<string, unknown>>;

/** Queues work inside the caller's transaction. Throws `wrong-state` if the subject is being worked on already. */
export async function enqueueJob(
  tx: Tx,
  actor: Actor,
  job: { kind: JobKind; subject: string; categoryId: number | null; payload: Record<string, unknown> },
): Promise<Job> {
  const stored = await repository.insertJob(tx, { ...job, actorId: actor.id });
  if (!stored)
    throw new ProblemError('wrong-state', 'This is being worked on already. Wait until it has ended, then try again.');
  return toJob(stored);
}

/** The queued or running job of a subject (`import:12`, `category:3`, `packs:3`), else null. */
export async function findActiveJob(tx: Tx, subject: string): Promise<Job | null> {
  const stored = await repository.findActive(tx, subject);
  return stored ? toJob(stored) : null;
}

export function readJob(database: Database, actor: Actor, id: number): Promise<Job> {
  return inTransaction(database, async (tx) => {
    const stored = await repository.findJob(tx, id);
    if (!stored) throw new ProblemError('not-found', 'There is no such job.');
    if (stored.actorId !== actor.id) {
      if (stored.categoryId === null) throw new ProblemError('not-found', 'There is no such job.');
      demandRight(actor, 'see-category', stored.categoryId);
    }
    return toJob(stored);
  });
}

export function toJob(stored: repository.StoredJob): Job {
  const { id, kind, state, progress, message, result, problem, startedAt, endedAt } = stored;
  return {
    id,
    kind,
    state,
    progress,
    message,
    result,
    problem,
    startedAt: startedAt?.toISOString() ?? null,
    endedAt: endedAt?.toISOString() ?? null,
  };
}

const reportEveryMs = 300;

/**
 * Runs one queued job to its end. Known problems end it as failed at once; anything else is thrown, so that the queue tries again,
 * and ends it as failed on the last attempt.
 */
export async function runJob(
  deps: {
    database: Database;
    log: Log;
    handlers: Readonly<Record<JobKind, JobHandler>>;
    loadActor(tx: Tx, id: number): Promise<Actor | null>;
  },
  jobId: number,
  isLastAttempt: boolean,
): Promise<void> {
  const { database, log, handlers } = deps;
  const loaded = await inTransaction(database, async (tx) => {
    const stored = await repository.findJob(tx, jobId);
    if (!stored || stored.state === 'done' || stored.state === 'failed') return null;
    await repository.markRunning(tx, jobId);
    const actor = await deps.loadActor(tx, stored.actorId);
    return actor ? { stored, actor } : null;
  });
  if (!loaded) return;
  let lastReport = 0;
  try {
    const result = await handlers[loaded.stored.kind]({
      database,
      log,
      jobId,
      actor: loaded.actor,
      payload: loaded.stored.payload,
      report: async (progress, message) => {
        const now = Date.now();
        if (now - lastReport < reportEveryMs && progress < 1) return;
        lastReport = now;
        await inTransaction(database, (tx) => repository.writeProgress(tx, jobId, Math.min(1, progress), message));
      },
    });
    await inTransaction(database, (tx) => repository.markDone(tx, jobId, result));
  } catch (error) {
    if (error instanceof ProblemError) {
      await inTransaction(database, (tx) =>
        repository.markFailed(tx, jobId, { type: error.type, detail: error.detail }),
      );
      return;
    }
    log.error({ err: error, jobId }, 'job failed');
    if (isLastAttempt) {
      const detail = 'Something went wrong and nothing was changed. Try again; if it stays, tell your administrator.';
      await inTransaction(database, (tx) => repository.markFailed(tx, jobId, { type: 'unexpected', detail }));
      return;
    }
    throw error;
  }
}

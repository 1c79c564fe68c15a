import type { Job } from '../../../shared/contracts/jobs.ts';
import { execute, selectRow, selectRows, type Tx } from '../../lib/database.ts';

export interface StoredJob {
  id: number;
  kind: Job['kind'];
  subject: string;
  categoryId: number | null;
  payload: Record<string, unknown>;
  state: Job['state'];
  progress: number;
  message: Job['message'];
  result: Job['result'];
  problem: Job['problem'];
  actorId: number;
  startedAt: Date | null;
  endedAt: Date | null;
}

const columns = `id, kind, subject, category_id as "categoryId", payload, state, progress, message, result, problem, actor_id as "actorId",
  started_at as "startedAt", ended_at as "endedAt"`;

export function findJob(tx: Tx, id: number): Promise<StoredJob | null> {
  return selectRow<StoredJob>(tx, `select ${columns} from job where id = $id`, { id });
}

/** The queued or running job of a subject, else null. */
export function findActive(tx: Tx, subject: string): Promise<StoredJob | null> {
  return selectRow<StoredJob>(
    tx,
    `select ${columns} from job where subject = $subject and state in ('queued', 'running')`,
    {
      subject,
    },
  );
}

/** Writes the job and hands it to the queue in the same transaction. null if the subject already has an active job. */
export async function insertJob(
  tx: Tx,
  job: {
    kind: Job['kind'];
    subject: string;
    categoryId: number | null;
    payload: Record<string, unknown>;
    actorId: number;
  },
): Promise<StoredJob | null> {
  const [row] = await selectRows<StoredJob>(
    tx,
    `insert into job (kind, subject, category_id, payload, actor_id)
     values ($kind, $subject, $categoryId, $payload::jsonb, $actorId)
     on conflict (subject) where state in ('queued', 'running') do nothing
     returning ${columns}`,
    { ...job, payload: JSON.stringify(job.payload) },
  );
  if (!row) return null;
  await execute(
    tx,
    `select graphile_worker.add_job('run-job', json_build_object('jobId', $id::int), max_attempts := 3, job_key := 'job:' || $id::int)`,
    { id: row.id },
  );
  return row;
}

export async function markRunning(tx: Tx, id: number): Promise<void> {
  await execute(tx, `update job set state = 'running', started_at = coalesce(started_at, now()) where id = $id`, {
    id,
  });
}

export async function writeProgress(tx: Tx, id: number, progress: number, message: Job['message']): Promise<void> {
  await execute(
    tx,
    `update job set progress = $progress, message = $message::jsonb where id = $id and state = 'running'`,
    {
      id,
      progress,
      message: JSON.stringify(message),
    },
  );
}

export async function markDone(tx: Tx, id: number, result: Record<string, unknown>): Promise<void> {
  await execute(
    tx,
    `update job set state = 'done', progress = 1, result = $result::jsonb, ended_at = now() where id = $id`,
    {
      id,
      result: JSON.stringify(result),
    },
  );
}

export async function markFailed(tx: Tx, id: number, problem: { type: string; detail: string }): Promise<void> {
  await execute(tx, `update job set state = 'failed', problem = $problem::jsonb, ended_at = now() where id = $id`, {
    id,
    problem: JSON.stringify(problem),
  });
}

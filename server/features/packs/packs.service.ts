import type { Readable } from 'node:stream';
import type { Job } from '../../../shared/contracts/jobs.ts';
import type { BuildPack, PackList } from '../../../shared/contracts/packs.ts';
import { demandRight, hasRight, type Actor } from '../../lib/authorise.ts';
import { inTransaction, type Database, type Tx } from '../../lib/database.ts';
import { ProblemError } from '../../lib/problem.ts';
import { readStoredFile } from '../../lib/stored-files.ts';
import { enqueueJob, findActiveJob } from '../jobs/jobs.service.ts';
import * as repository from './packs.repository.ts';

export function listPacks(database: Database, actor: Actor, categoryId: number): Promise<PackList> {
  demandRight(actor, 'see-category', categoryId);
  return inTransaction(database, async (tx) => {
    const lines = await repository.listLockedLines(tx, categoryId);
    const firsts = lines.flatMap(({ firstLockedWeek }) => firstLockedWeek ?? []);
    const lasts = lines.flatMap(({ lastLockedWeek }) => lastLockedWeek ?? []);
    return {
      packs: await repository.listPacks(tx, categoryId),
      offer: {
        categoryId,
        firstWeek: firsts.sort()[0] ?? null,
        lastWeek: lasts.sort().at(-1) ?? null,
        lines: lines.map((line) => ({ ...line, lockedAt: line.lockedAt?.toISOString() ?? null })),
      },
      mayBuild: hasRight(actor, 'build-pack', categoryId),
      mayDownload: hasRight(actor, 'download-pack', categoryId),
      activeJob: await findActiveJob(tx, `packs:${categoryId}`),
    };
  });
}

/** Queues a pack of the named lines' locked weeks. Each line must have locked weeks in the range. */
export function startPack(database: Database, actor: Actor, build: BuildPack): Promise<Job> {
  demandRight(actor, 'build-pack', build.categoryId);
  if (build.lastWeek < build.firstWeek) {
    throw new ProblemError('invalid-request', 'The last week lies before the first one. Turn them round.', {
      errors: [{ pointer: '/lastWeek', detail: 'must not lie before firstWeek' }],
    });
  }
  return inTransaction(database, async (tx) => {
    await demandLockedLines(tx, build);
    return enqueueJob(tx, actor, {
      kind: 'pack.build',
      subject: `packs:${build.categoryId}`,
      categoryId: build.categoryId,
      payload: { ...build },
    });
  });
}

/** The lines of a pack with their locked versions; throws `wrong-state` where one has no locked week in the range. */
export async function demandLockedLines(
  tx: Tx,
  { categoryId, lineIds, firstWeek, lastWeek }: BuildPack,
): Promise<(repository.LockedLine & { lockedVersion: number })[]> {
  const lines = await repository.listLockedLines(tx, categoryId);
  return lineIds.map((id) => {
    const line = lines.find((candidate) => candidate.id === id);
    if (!line)
      throw new ProblemError('not-found', 'A line of the pack isn’t in this category any more. Reload the page.');
    const { lockedVersion, firstLockedWeek, lastLockedWeek } = line;
    if (
      lockedVersion === null ||
      firstLockedWeek === null ||
      lastLockedWeek === null ||
      firstLockedWeek > lastWeek ||
      lastLockedWeek < firstWeek
    ) {
      throw new ProblemError(
        'wrong-state',
        `${line.name} has no locked week in this range. Leave it out, choose other weeks, or ask the category lead to lock it.`,
      );
    }
    return { ...line, lockedVersion };
  });
}

/** Gives a pack's bytes, exactly as they were stored, to `send`. */
export function openPackFile(
  database: Database,
  actor: Actor,
  id: number,
  send: (file: { fileName: string; sizeBytes: number; sha256: string }, bytes: Readable) => Promise<void>,
): Promise<void> {
  return inTransaction(database, async (tx) => {
    const file = await repository.findPackFile(tx, id);
    if (!file) throw new ProblemError('not-found', 'There is no such pack, or you have no access to its category.');
    demandRight(actor, 'download-pack', file.categoryId);
    await send(file, readStoredFile(tx, file.fileId));
  });
}

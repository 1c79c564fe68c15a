import { createWriteStream } from 'node:fs';
import { mkdtemp, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { finished } from 'node:stream/promises';
import { BuildPack } from '../../../shared/contracts/packs.ts';
import { writeAudit } from '../../lib/audit.ts';
import { demandRight } from '../../lib/authorise.ts';
import { inTransaction } from '../../lib/database.ts';
import { ProblemError } from '../../lib/problem.ts';
import { storeFile } from '../../lib/stored-files.ts';
import { namePackFile } from '../../workbooks/pack/pack-names.ts';
import { writePack } from '../../workbooks/pack/write-pack.ts';
import type { JobHandler } from '../jobs/jobs.service.ts';
import { packContentSource } from '../plan/plan.service.ts';
import { loadSettings } from '../settings/settings.service.ts';
import { assemblePack, summarisePack } from './pack-assembly.ts';
import * as repository from './packs.repository.ts';
import { demandLockedLines } from './packs.service.ts';

/**
 * Builds a pack from the locked versions: reads them, writes the workbook to a temporary file, then keeps file and pack in one transaction.
 * The number is taken at the start; should another pack have taken it meanwhile, the job ends with a problem and nothing is kept.
 */
export const buildPackJob: JobHandler = async ({ database, actor, payload, report }) => {
  const build = BuildPack.parse(payload);
  demandRight(actor, 'build-pack', build.categoryId);
  await report(0.05, { key: 'pack.gathering', values: { lines: build.lineIds.length } });
  const { content, lines } = await inTransaction(database, async (tx) => {
    const category = await repository.lockCategory(tx, build.categoryId);
    if (!category) throw new ProblemError('not-found', 'The category isn’t there any more.');
    const locked = await demandLockedLines(tx, build);
    const planned = [];
    for (const line of locked) planned.push(await packContentSource(tx, line.id, line.lockedVersion));
    const { currency } = await loadSettings(tx);
    const frame = {
      category: category.name,
      number: await repository.nextPackNumber(tx, build.categoryId),
      firstWeek: build.firstWeek,
      lastWeek: build.lastWeek,
      currency,
      isVatIncluded: await repository.isVatIncluded(tx, build.categoryId),
      builtAt: new Date(),
      builtBy: actor.name,
      timeZone: 'UTC',
    };
    return { content: assemblePack(frame, planned), lines: planned };
  });

  await report(0.4, { key: 'pack.writing', values: { lines: lines.length } });
  const folder = await mkdtemp(path.join(tmpdir(), 'fairweek-pack-'));
  try {
    const filePath = path.join(folder, 'pack.xlsx');
    const stream = createWriteStream(filePath);
    await Promise.all([writePack(content, stream), finished(stream)]);
    await report(0.8, { key: 'pack.storing', values: {} });
    return await inTransaction(database, async (tx) => {
      await repository.lockCategory(tx, build.categoryId);
      // What was locked when the content was read must still be: an unlock in between would make the pack untrue.
      const stillLocked = await demandLockedLines(tx, build);
      const isSame = stillLocked.every((line, index) => line.lockedVersion === lines[index]?.version.number);
      if (!isSame || (await repository.nextPackNumber(tx, build.categoryId)) !== content.number) {
        throw new ProblemError(
          'wrong-state',
          'Locks or packs of this category changed while the pack was built. Build it again.',
        );
      }
      const file = await storeFile(tx, filePath, namePackFile(content));
      const packId = await repository.insertPack(tx, {
        number: content.number,
        categoryId: build.categoryId,
        firstWeek: build.firstWeek,
        lastWeek: build.lastWeek,
        versions: summarisePack(content, lines),
        units: content.controlTotals.units,
        netValue: content.controlTotals.netValue,
        fileId: file.id,
        sha256: file.sha256,
        actorId: actor.id,
      });
      await writeAudit(tx, {
        actor,
        action: 'build-pack',
        subject: `pack:${packId}`,
        categoryId: build.categoryId,
        new: { number: content.number, sha256: file.sha256, lines: build.lineIds },
      });
      return { packId };
    });
  } finally {
    await rm(folder, { recursive: true, force: true });
  }
};

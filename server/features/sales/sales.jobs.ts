import { createWriteStream } from 'node:fs';
import { mkdtemp, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { pipeline } from 'node:stream/promises';
import type { Weekday } from '../../../shared/domain/weeks.ts';
import type { ImportMapping, ImportTotals } from '../../../shared/contracts/sales.ts';
import { writeAudit } from '../../lib/audit.ts';
import { scopeOf, type Actor } from '../../lib/authorise.ts';
import { inTransaction, type Database, type Tx } from '../../lib/database.ts';
import { ProblemError } from '../../lib/problem.ts';
import { readStoredFile } from '../../lib/stored-files.ts';
import { UnreadableFileError } from '../../workbooks/reading/unreadable-file-error.ts';
import { acceptPlannedRows, comparePlannedRows, noteCalendarWithdrawn } from '../calendar/calendar.service.ts';
import type { JobContext, JobHandler } from '../jobs/jobs.service.ts';
import * as imports from './imports.repository.ts';
import type { ImportPreview, StoredImport } from './imports.repository.ts';
import { openUpload, proposeReading, stageRows, toNotice, type StagedReading } from './import-reading.ts';
import { wholeMarket, type RangeSnapshot, type ResolverChoices } from './range-resolver.ts';
import * as staging from './staging.repository.ts';
import { StagingFile } from './staging-file.ts';

const missingChoiceTexts = {
  category: 'The file names no category for its new items. Choose the category they belong to.',
  line: 'The file names no product line for its new items. Choose the line they belong to, or name a new one.',
} as const;

/** Reads an uploaded file: proposes or applies the mapping, totals what could be accepted and lists what couldn't. Accepts nothing. */
export const readImportJob: JobHandler = async (context) => {
  const { database } = context;
  const id = importIdOf(context);
  const stored = await inTransaction(database, async (tx) => {
    const state = await imports.lockImport(tx, id);
    if (state !== 'reading' && state !== 'refused') return null;
    await imports.setState(tx, id, 'reading');
    return imports.getImport(tx, id);
  });
  if (!stored) return { importId: id };
  try {
    await withFolder((folder) => readIntoPreview(context, stored, folder));
  } catch (error) {
    const refusal =
      error instanceof UnreadableFileError
        ? error.message
        : 'Something went wrong while the file was read. Send it again; if it stays, tell your administrator.';
    await inTransaction(database, (tx) => imports.setRefused(tx, id, refusal));
    if (!(error instanceof UnreadableFileError)) throw error;
  }
  return { importId: id };
};

async function readIntoPreview(context: JobContext, stored: StoredImport, folder: string): Promise<void> {
  const { database, actor } = context;
  await context.report(0.02, { key: 'openingFile', values: { file: stored.fileName } });
  const table = await openStoredFile(database, stored, folder);
  try {
    const { range, fixedFirstWeekday } = await inTransaction(database, loadSurroundings);
    const permitted = permittedCategories(actor, stored.mapping?.kind ?? 'sales');
    const proposal = await proposeReading(table, stored.mapping, {
      fixedFirstWeekday,
      recall: (fingerprint) =>
        inTransaction(database, (tx) =>
          imports.recallMapping(tx, fingerprint, { actorId: actor.id, categories: scopeOf(actor, 'see-category') }),
        ),
      suggested: suggestPlace(range, permitted),
    });
    const { mapping } = proposal;
    const preview: ImportPreview = {
      fingerprint: proposal.fingerprint,
      sheets: proposal.sheets,
      sample: proposal.sample,
      unknown: null,
      obstacle: proposal.obstacle,
      lineIds: [],
    };
    if (proposal.obstacle !== null) {
      await inTransaction(database, async (tx) => {
        await demandState(tx, stored.id, 'reading');
        await imports.setRead(tx, stored.id, { mapping, totals: null, preview });
        await imports.replaceFindings(tx, stored.id, proposal.findings);
      });
      return;
    }
    const file = new StagingFile(path.join(folder, 'rows'));
    const estimatedRows = Math.max(1, stored.sizeBytes / (table.format === 'xlsx' ? 15 : 45));
    const reading = await stageRows(table, mapping, range, toChoices(actor, mapping), file, (rows) =>
      context.report(0.05 + 0.8 * Math.min(1, rows / estimatedRows), { key: 'readingRows', values: { rows } }),
    );
    await file.close();
    await context.report(0.9, { key: 'comparingRows', values: { rows: reading.rowsRead } });
    await inTransaction(database, async (tx) => {
      await demandState(tx, stored.id, 'reading');
      await pourStaged(tx, reading, file.path);
      const totals = await totalPoured(tx, mapping, reading);
      const { resolver } = reading;
      if (resolver.missingChoice !== null) preview.obstacle = missingChoiceTexts[resolver.missingChoice];
      preview.unknown = resolver.listUnknown();
      preview.lineIds = [...new Set(resolver.items.flatMap(({ lineId }) => (lineId === null ? [] : [lineId])))];
      await imports.setRead(tx, stored.id, { mapping, totals, preview });
      await imports.replaceCategories(tx, stored.id, await staging.listPouredCategories(tx));
      const choice = preview.obstacle === null ? [] : [toNotice('mapping-incomplete', preview.obstacle)];
      await imports.replaceFindings(tx, stored.id, [...choice, ...proposal.findings, ...reading.findings]);
    });
  } finally {
    await table.close();
  }
}

/** Reads the file once more with the mapping agreed on and merges its rows in one transaction. */
export const acceptImportJob: JobHandler = async (context) => {
  const { database } = context;
  const id = importIdOf(context);
  const stored = await inTransaction(database, async (tx) => {
    const state = await imports.lockImport(tx, id);
    if (state === 'accepted') return null;
    if (state !== 'accepting' && state !== 'to-check') throw notNow();
    await imports.setState(tx, id, 'accepting');
    return imports.getImport(tx, id);
  });
  if (!stored) return { importId: id };
  try {
    await withFolder((folder) => mergeFile(context, stored, folder));
  } catch (error) {
    await inTransaction(database, async (tx) => {
      if ((await imports.lockImport(tx, id)) === 'accepting') await imports.setState(tx, id, 'to-check');
    });
    throw error instanceof UnreadableFileError ? new ProblemError('unreadable-file', error.message) : error;
  }
  return { importId: id };
};

async function mergeFile(context: JobContext, stored: StoredImport, folder: string): Promise<void> {
  const { database, actor, payload } = context;
  const { mapping, totals: checked } = stored;
  if (mapping === null || checked === null) {
    throw new ProblemError('mapping-incomplete', 'Choose what the columns mean first.');
  }
  const createsUnknown = payload.createUnknown === true;
  await context.report(0.02, { key: 'openingFile', values: { file: stored.fileName } });
  const table = await openStoredFile(database, stored, folder);
  const file = new StagingFile(path.join(folder, 'rows'));
  let reading: StagedReading;
  try {
    const { range } = await inTransaction(database, loadSurroundings);
    const expectedRows = Math.max(1, checked.rowsRead);
    reading = await stageRows(table, mapping, range, toChoices(actor, mapping), file, (rows) =>
      context.report(0.05 + 0.65 * Math.min(1, rows / expectedRows), { key: 'readingRows', values: { rows } }),
    );
    await file.close();
  } finally {
    await table.close();
  }
  const { resolver, firstWeek, lastWeek } = reading;
  if (resolver.missingChoice !== null && createsUnknown) {
    throw new ProblemError('mapping-incomplete', missingChoiceTexts[resolver.missingChoice]);
  }
  if (firstWeek === null || lastWeek === null) throw nothingToAccept();
  if (mapping.kind === 'sales') {
    await inTransaction(database, (tx) => staging.ensureSalesMonths(tx, firstWeek, lastWeek));
  }
  await context.report(0.75, { key: 'mergingRows', values: { rows: reading.rowsRead - reading.rowsRefused } });
  await inTransaction(database, async (tx) => {
    await staging.lockMerges(tx);
    await demandState(tx, stored.id, 'accepting');
    await pourStaged(tx, reading, file.path);
    // What the rows changed is told as it was when the person looked; the rows themselves are counted anew.
    const totals: ImportTotals = {
      ...checked,
      rowsRead: reading.rowsRead,
      rowsRefused: reading.rowsRefused,
      rowsRepaired: reading.rowsRepaired,
      ...(await staging.totalRows(tx)),
    };
    if (mapping.kind === 'sales') {
      if (createsUnknown) await staging.createMissingItems(tx);
      await staging.createMissingLocations(tx, createsUnknown ? null : wholeMarket);
      await leaveOutUnknown(tx, reading, totals);
      const row = { importId: stored.id, change: 'accept', actorId: actor.id } as const;
      await staging.mergeSales(tx, stored.id, await staging.insertSalesRevision(tx, row));
      await staging.fixFirstWeekday(tx, mapping.firstWeekday);
    } else {
      await acceptPlannedRows(tx, actor, stored.id, await staging.selectPlannedRows(tx));
    }
    await imports.replaceCategories(tx, stored.id, await staging.listPouredCategories(tx));
    await imports.replaceFindings(tx, stored.id, reading.findings);
    await imports.setAccepted(tx, stored.id, actor.id, totals);
    await auditImport(tx, context, stored, 'import.accept', typeof payload.note === 'string' ? payload.note : null, {
      rows: totals.rowsTaken,
      refused: totals.rowsRefused,
      firstWeek: totals.firstWeek,
      lastWeek: totals.lastWeek,
      units: totals.units,
    });
  });
}

/** Pours the staged rows into this transaction's temporary tables. */
async function pourStaged(tx: Tx, reading: StagedReading, stagingPath: string): Promise<void> {
  const { resolver } = reading;
  await staging.pourRows(tx, stagingPath, resolver.items, resolver.locations);
  if (!resolver.hasAliases) return;
  const repeated = await staging.removeRepeatedKeys(tx);
  reading.rowsRefused += repeated.length;
  for (const { row, code } of repeated) {
    const detail = `${code} has this week and location already in an earlier row, under another spelling; that one is taken.`;
    reading.findings.push({ ...toNotice('duplicate-row', detail, 'refused'), row });
  }
}

/** Adds the poured rows up, beside what is held. */
async function totalPoured(tx: Tx, mapping: ImportMapping, reading: StagedReading): Promise<ImportTotals> {
  const { rowsRead, rowsRefused, rowsRepaired } = reading;
  const compared =
    mapping.kind === 'sales'
      ? await staging.compareRows(tx)
      : await comparePlannedRows(tx, await staging.selectPlannedRows(tx));
  const byWeek = await staging.totalRowsByWeek(tx);
  return { rowsRead, rowsRefused, rowsRepaired, ...(await staging.totalRows(tx)), ...compared, byWeek };
}

/** Rows that name what still isn't known stay out; the totals then tell what was merged. */
async function leaveOutUnknown(tx: Tx, reading: StagedReading, totals: ImportTotals): Promise<void> {
  const leftOut = await staging.removeUnknownRows(tx);
  if (leftOut > 0) {
    const detail = `${leftOut} rows name items, lines or locations that aren’t known; they were left out.`;
    reading.findings.push(toNotice('unknown-left-out', detail));
    Object.assign(totals, await staging.totalRows(tx), {
      rowsRefused: reading.rowsRefused + leftOut,
      byWeek: await staging.totalRowsByWeek(tx),
    });
  }
  if (totals.rowsTaken === 0) throw nothingToAccept();
}

/** Takes an accepted import out of force and brings back what was there before, for the keys it touched only. */
export const withdrawImportJob: JobHandler = async (context) => {
  const { database, actor, payload } = context;
  const id = importIdOf(context);
  const why = typeof payload.reason === 'string' ? payload.reason : '';
  await context.report(0.1, { key: 'withdrawing', values: {} });
  try {
    await inTransaction(database, async (tx) => {
      await staging.lockMerges(tx);
      const state = await imports.lockImport(tx, id);
      if (state === 'withdrawn') return;
      if (state !== 'withdrawing' && state !== 'accepted') throw notNow();
      const stored = await imports.getImport(tx, id);
      if (!stored) throw notNow();
      await imports.setWithdrawn(tx, id, actor.id, why);
      let counts: Record<string, number> = {};
      if (stored.kind === 'sales') {
        counts = await staging.restoreEarlierSales(tx, id);
        await staging.insertSalesRevision(tx, { importId: id, change: 'withdraw', actorId: actor.id });
      } else {
        await noteCalendarWithdrawn(tx, actor, id, why);
      }
      await auditImport(tx, context, stored, 'import.withdraw', why, counts);
    });
  } catch (error) {
    await inTransaction(database, async (tx) => {
      if ((await imports.lockImport(tx, id)) === 'withdrawing') await imports.setState(tx, id, 'accepted');
    });
    throw error;
  }
  return { importId: id };
};

/** One row for each category touched, so that its lead finds it. */
async function auditImport(
  tx: Tx,
  { actor }: JobContext,
  stored: StoredImport,
  action: string,
  why: string | null,
  values: Record<string, unknown>,
): Promise<void> {
  const touched = (await imports.getImport(tx, stored.id))?.categoryIds ?? [];
  for (const categoryId of touched.length > 0 ? touched : [null]) {
    await writeAudit(tx, {
      actor,
      action,
      subject: `import:${stored.id}`,
      categoryId,
      new: { fileName: stored.fileName, sha256: stored.sha256, kind: stored.kind, ...values },
      why,
    });
  }
}

async function withFolder<T>(work: (folder: string) => Promise<T>): Promise<T> {
  const folder = await mkdtemp(path.join(tmpdir(), 'fairweek-import-'));
  try {
    return await work(folder);
  } finally {
    await rm(folder, { recursive: true, force: true });
  }
}

async function openStoredFile(database: Database, stored: StoredImport, folder: string) {
  const copy = path.join(folder, 'file');
  await inTransaction(database, (tx) => pipeline(readStoredFile(tx, stored.fileId), createWriteStream(copy)));
  return openUpload(copy, stored.fileName);
}

async function loadSurroundings(tx: Tx): Promise<{ range: RangeSnapshot; fixedFirstWeekday: Weekday | null }> {
  return {
    range: await imports.selectRange(tx),
    fixedFirstWeekday: (await imports.selectFirstWeekday(tx)) as Weekday | null,
  };
}

/** The only category that the person imports for, and its only line. */
function suggestPlace(
  range: RangeSnapshot,
  permitted: readonly number[] | null,
): { categoryId: number | null; lineId: number | null } {
  const categories = permitted ?? range.categories.map(({ id }) => id);
  const categoryId = categories.length === 1 ? (categories[0] ?? null) : null;
  const lines = range.lines.filter((line) => line.categoryId === categoryId);
  return { categoryId, lineId: lines.length === 1 ? (lines[0]?.id ?? null) : null };
}

/** null = all: a data steward imports for every category. */
function permittedCategories(actor: Actor, kind: ImportMapping['kind']): number[] | null {
  return actor.isDataSteward ? null : scopeOf(actor, kind === 'calendar' ? 'edit-calendar' : 'import-sales');
}

function toChoices(actor: Actor, mapping: ImportMapping): ResolverChoices {
  return {
    permittedCategories: permittedCategories(actor, mapping.kind),
    categoryId: mapping.categoryId,
    lineId: mapping.lineId,
    newLineName: mapping.newLineName,
    mayCreate: mapping.kind === 'sales',
  };
}

async function demandState(tx: Tx, id: number, state: 'reading' | 'accepting'): Promise<void> {
  if ((await imports.lockImport(tx, id)) !== state) throw notNow();
}

function importIdOf({ payload }: JobContext): number {
  if (typeof payload.importId !== 'number') throw new Error('the job names no import');
  return payload.importId;
}

function notNow(): ProblemError {
  return new ProblemError('wrong-state', 'The import has changed meanwhile. Open it again and look at its state.');
}

function nothingToAccept(): ProblemError {
  return new ProblemError(
    'nothing-to-accept',
    'No row of the file can be taken. Look at the refused rows and their reasons.',
  );
}

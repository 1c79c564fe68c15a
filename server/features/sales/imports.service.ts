import type {
  AcceptImport,
  ImportDetail,
  ImportList,
  ImportMapping,
  ImportSummary,
  WithdrawImport,
} from '../../../shared/contracts/sales.ts';
import type { Job } from '../../../shared/contracts/jobs.ts';
import { writeAudit } from '../../lib/audit.ts';
import { demandRight, hasRight, scopeOf, type Actor } from '../../lib/authorise.ts';
import { inTransaction, type Database, type Tx } from '../../lib/database.ts';
import { ProblemError } from '../../lib/problem.ts';
import { storeFile } from '../../lib/stored-files.ts';
import { enqueueJob, findActiveJob } from '../jobs/jobs.service.ts';
import * as imports from './imports.repository.ts';
import type { Onlooker, StoredImport } from './imports.repository.ts';
import { writeRefusedRows } from './refused-rows.ts';
import * as sales from './sales.repository.ts';

const shownFindings = 100;

/** Imports in the actor's sight, and how the data of the category stand. */
export function listImports(database: Database, actor: Actor, categoryId: number | null): Promise<ImportList> {
  return inTransaction(database, async (tx) => {
    if (categoryId !== null) demandRight(actor, 'see-category', categoryId);
    const stored = await imports.listImports(tx, toOnlooker(actor), categoryId);
    return {
      imports: stored.map(toSummary),
      health: categoryId === null ? null : await sales.selectHealth(tx, categoryId),
      mayImport:
        hasRight(actor, 'import-sales', categoryId) || (actor.isDataSteward && hasRight(actor, 'import-sales', null)),
    };
  });
}

/** Keeps an uploaded file and queues its reading. path: where it lies for the moment. */
export function receiveFile(
  database: Database,
  actor: Actor,
  file: { path: string; fileName: string },
): Promise<ImportDetail> {
  demandRight(actor, 'import-sales', null);
  return inTransaction(database, async (tx) => {
    const stored = await storeFile(tx, file.path, file.fileName);
    const id = await imports.insertImport(tx, { fileId: stored.id, sha256: stored.sha256, actorId: actor.id });
    const job = await enqueueReading(tx, actor, id);
    await writeAudit(tx, {
      actor,
      action: 'import.receive',
      subject: `import:${id}`,
      new: { fileName: file.fileName, sha256: stored.sha256, sizeBytes: stored.sizeBytes },
    });
    return describeImport(tx, actor, await demandImport(tx, actor, id), job);
  });
}

export function readImport(database: Database, actor: Actor, id: number): Promise<ImportDetail> {
  return inTransaction(database, async (tx) => {
    // In this order a job that ends in between shows as active once more, never as an import that waits for nothing.
    const activeJob = await findActiveJob(tx, `import:${id}`);
    return describeImport(tx, actor, await demandImport(tx, actor, id), activeJob);
  });
}

/** Has the file read anew with a mapping corrected by hand. */
export function changeMapping(
  database: Database,
  actor: Actor,
  id: number,
  mapping: ImportMapping,
): Promise<ImportDetail> {
  return inTransaction(database, async (tx) => {
    const stored = await demandImport(tx, actor, id, { isLocked: true });
    demandAuthority(actor, stored);
    if (stored.state !== 'to-check' && stored.state !== 'refused') throw wrongState(stored);
    if (mapping.categoryId !== null && !actor.isDataSteward) demandRight(actor, 'import-sales', mapping.categoryId);
    await imports.setMapping(tx, id, mapping);
    const job = await enqueueReading(tx, actor, id);
    return describeImport(tx, actor, await demandImport(tx, actor, id), job);
  });
}

/** Queues the merge of everything in the file that can be taken. */
export function acceptImport(database: Database, actor: Actor, id: number, request: AcceptImport): Promise<Job> {
  return inTransaction(database, async (tx) => {
    const stored = await demandImport(tx, actor, id, { isLocked: true });
    demandAuthority(actor, stored);
    if (stored.state !== 'to-check') throw wrongState(stored);
    const obstacle = stored.preview?.obstacle ?? null;
    if (obstacle !== null && (stored.totals === null || request.createUnknown)) {
      throw new ProblemError('mapping-incomplete', obstacle);
    }
    if (stored.totals === null || stored.totals.rowsTaken === 0) {
      throw new ProblemError(
        'nothing-to-accept',
        'No row of the file can be taken. Look at the refused rows and their reasons.',
      );
    }
    await imports.setState(tx, id, 'accepting');
    return enqueueJob(tx, actor, {
      kind: 'import.accept',
      subject: `import:${id}`,
      categoryId: onlyCategory(stored),
      payload: { importId: id, createUnknown: request.createUnknown, note: request.note ?? null },
    });
  });
}

/** Queues bringing back what was there before the import. */
export function withdrawImport(database: Database, actor: Actor, id: number, request: WithdrawImport): Promise<Job> {
  return inTransaction(database, async (tx) => {
    const stored = await demandImport(tx, actor, id, { isLocked: true });
    demandAuthority(actor, stored);
    if (stored.state !== 'accepted') throw wrongState(stored);
    await imports.setState(tx, id, 'withdrawing');
    return enqueueJob(tx, actor, {
      kind: 'import.withdraw',
      subject: `import:${id}`,
      categoryId: onlyCategory(stored),
      payload: { importId: id, reason: request.reason },
    });
  });
}

/** Drops a file that was never accepted; the file and what was found in it stay on record. */
export function discardImport(database: Database, actor: Actor, id: number): Promise<void> {
  return inTransaction(database, async (tx) => {
    const stored = await demandImport(tx, actor, id, { isLocked: true });
    demandAuthority(actor, stored);
    const isIdle = (await findActiveJob(tx, `import:${id}`)) === null;
    if ((stored.state !== 'to-check' && stored.state !== 'refused') || !isIdle) throw wrongState(stored);
    await imports.setState(tx, id, 'discarded');
    await writeAudit(tx, { actor, action: 'import.discard', subject: `import:${id}` });
  });
}

/** The refused rows as they stand in the file, with cell and reason, as a CSV file that no spreadsheet program takes for formulas. */
export function readRefusedRows(
  database: Database,
  actor: Actor,
  id: number,
): Promise<{ fileName: string; text: string }> {
  return inTransaction(database, async (tx) => {
    const stored = await demandImport(tx, actor, id);
    if (!seesAllOf(actor, stored)) {
      throw new ProblemError('not-allowed', 'The file holds categories that you have no access to. Ask who sent it.');
    }
    const headers = stored.mapping?.columns.map(({ header }) => header) ?? [];
    return {
      fileName: `refused-${stored.fileName.replace(/\.[^.]*$/, '')}.csv`,
      text: writeRefusedRows(headers, await imports.listRefusedRows(tx, id)),
    };
  });
}

async function describeImport(
  tx: Tx,
  actor: Actor,
  stored: StoredImport,
  activeJob: Job | null,
): Promise<ImportDetail> {
  const isWhole = seesAllOf(actor, stored);
  const { totals, preview } = stored;
  const mayChange = hasAuthority(actor, stored);
  const isPeriodKnown = totals?.firstWeek && totals.lastWeek && preview && preview.lineIds.length > 0;
  return {
    ...toSummary(stored),
    mapping: isWhole ? stored.mapping : null,
    sample: isWhole ? (preview?.sample ?? []) : [],
    sheets: isWhole ? (preview?.sheets ?? []) : [],
    totals: isWhole ? totals : null,
    unknown: isWhole ? (preview?.unknown ?? null) : null,
    findingCounts: await imports.countFindings(tx, stored.id),
    findings: isWhole ? await imports.listFindings(tx, stored.id, shownFindings) : [],
    refusal: stored.refusal,
    sameFileAs: await imports.findSameFile(tx, stored, toOnlooker(actor)),
    lockedWeeks:
      isWhole && isPeriodKnown
        ? await imports.listLockedWeeks(tx, {
            lineIds: preview.lineIds,
            firstWeek: totals.firstWeek ?? '',
            lastWeek: totals.lastWeek ?? '',
          })
        : [],
    mayAccept: stored.state === 'to-check' && mayChange,
    mayWithdraw: stored.state === 'accepted' && mayChange,
    activeJob,
  };
}

function toSummary(stored: StoredImport): ImportSummary {
  const { id, kind, fileName, sha256, sizeBytes, state, totals } = stored;
  return {
    id,
    kind,
    fileName,
    sha256,
    sizeBytes,
    state,
    at: stored.createdAt.toISOString(),
    by: stored.actorName,
    acceptedAt: stored.acceptedAt?.toISOString() ?? null,
    rowsTaken: totals?.rowsTaken ?? null,
    rowsRefused: totals?.rowsRefused ?? null,
    firstWeek: totals?.firstWeek ?? null,
    lastWeek: totals?.lastWeek ?? null,
    units: totals?.units ?? null,
  };
}

function enqueueReading(tx: Tx, actor: Actor, id: number): Promise<Job> {
  return enqueueJob(tx, actor, {
    kind: 'import.read',
    subject: `import:${id}`,
    categoryId: null,
    payload: { importId: id },
  });
}

async function demandImport(
  tx: Tx,
  actor: Actor,
  id: number,
  { isLocked = false }: { isLocked?: boolean } = {},
): Promise<StoredImport> {
  const onlooker = toOnlooker(actor);
  const seen = await imports.findImport(tx, id, onlooker);
  const stored = seen && isLocked ? await lockAndFind(tx, id, onlooker) : seen;
  if (!stored) throw new ProblemError('not-found', 'There is no such import, or you have no access to its category.');
  return stored;
}

async function lockAndFind(tx: Tx, id: number, onlooker: Onlooker): Promise<StoredImport | null> {
  await imports.lockImport(tx, id);
  return imports.findImport(tx, id, onlooker);
}

function toOnlooker(actor: Actor): Onlooker {
  return { actorId: actor.id, categories: scopeOf(actor, 'see-category') };
}

/** May change what the import stands for: in each of its categories, or as a data steward. One's own file without categories is one's own. */
function hasAuthority(actor: Actor, stored: StoredImport): boolean {
  if (!hasRight(actor, 'import-sales', null)) return false;
  if (actor.isDataSteward) return true;
  return stored.categoryIds.length === 0
    ? stored.actorId === actor.id
    : stored.categoryIds.every((categoryId) => hasRight(actor, 'import-sales', categoryId));
}

function demandAuthority(actor: Actor, stored: StoredImport): void {
  if (hasAuthority(actor, stored)) return;
  for (const categoryId of stored.categoryIds) demandRight(actor, 'import-sales', categoryId);
  throw new ProblemError('not-allowed', 'Your role doesn’t allow this. A planner or category lead can import.');
}

function seesAllOf(actor: Actor, stored: StoredImport): boolean {
  return (
    stored.actorId === actor.id || stored.categoryIds.every((categoryId) => hasRight(actor, 'see-category', categoryId))
  );
}

function onlyCategory({ categoryIds }: StoredImport): number | null {
  return categoryIds.length === 1 ? (categoryIds[0] ?? null) : null;
}

function wrongState({ state }: StoredImport): ProblemError {
  const what = {
    reading: 'The file is still being read. Wait until that has ended.',
    'to-check': 'The import waits to be accepted or discarded. Look at it and try again.',
    accepting: 'The import is being accepted. Wait until that has ended.',
    accepted: 'The import was accepted already. Withdraw it if it is wrong.',
    withdrawing: 'The import is being withdrawn. Wait until that has ended.',
    withdrawn: 'The import was withdrawn. Send the file again if you want it back.',
    refused: 'The file couldn’t be read. Correct it and send it again.',
    discarded: 'The import was discarded. Send the file again if you want it back.',
  } as const;
  return new ProblemError('wrong-state', what[state]);
}

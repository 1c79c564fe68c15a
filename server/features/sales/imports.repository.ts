import type {
  ImportFinding,
  ImportKind,
  ImportMapping,
  ImportState,
  ImportTotals,
  UnknownNames,
} from '../../../shared/contracts/sales.ts';
import { execute, selectRow, selectRows, type Tx } from '../../lib/database.ts';
import { toJsonText } from './json-text.ts';
import type { RangeSnapshot } from './range-resolver.ts';

/** What the last reading found beside totals and findings. */
export interface ImportPreview {
  fingerprint: string;
  sheets: { name: string; isHidden: boolean; rows: number | null }[];
  sample: string[][];
  unknown: UnknownNames | null;
  /** Why rows can't be accepted with this mapping; null = they can. */
  obstacle: string | null;
  /** Lines of the file's items that exist. */
  lineIds: number[];
}

export interface StoredImport {
  id: number;
  kind: ImportKind;
  fileId: number;
  fileName: string;
  sizeBytes: number;
  sha256: string;
  mapping: ImportMapping | null;
  state: ImportState;
  totals: ImportTotals | null;
  preview: ImportPreview | null;
  refusal: string | null;
  actorId: number;
  actorName: string;
  createdAt: Date;
  acceptedAt: Date | null;
  categoryIds: number[];
}

/** Who asks: imports of categories in sight, and one's own. */
export interface Onlooker {
  actorId: number;
  /** null = all categories. */
  categories: readonly number[] | null;
}

const columns = `m.id, m.kind, m.file_id as "fileId", f.file_name as "fileName", f.size_bytes::float8 as "sizeBytes", m.sha256, m.mapping, m.state,
  m.totals, m.preview, m.refusal, m.actor_id as "actorId", p.name as "actorName", m.created_at as "createdAt", m.accepted_at as "acceptedAt",
  coalesce((select array_agg(c.category_id order by c.category_id) from import_category c where c.import_id = m.id), '{}') as "categoryIds"`;

const source = `"import" m join stored_file f on f.id = m.file_id join person p on p.id = m.actor_id`;

const isVisible = `(m.actor_id = $actorId or exists (
  select from import_category c where c.import_id = m.id and ($categories::int[] is null or c.category_id = any($categories::int[]))))`;

export function findImport(tx: Tx, id: number, onlooker: Onlooker): Promise<StoredImport | null> {
  return selectRow<StoredImport>(tx, `select ${columns} from ${source} where m.id = $id and ${isVisible}`, {
    id,
    ...onlooker,
  });
}

/** For a job, which acts on what it was started for. */
export function getImport(tx: Tx, id: number): Promise<StoredImport | null> {
  return selectRow<StoredImport>(tx, `select ${columns} from ${source} where m.id = $id`, { id });
}

/** Waits until nobody else changes the import, and holds it until the transaction ends. */
export async function lockImport(tx: Tx, id: number): Promise<ImportState | null> {
  const row = await selectRow<{ state: ImportState }>(tx, `select state from "import" where id = $id for update`, {
    id,
  });
  return row?.state ?? null;
}

/** The newest first; with a category: those that touch it, and one's own that touch none yet. */
export function listImports(tx: Tx, onlooker: Onlooker, categoryId: number | null): Promise<StoredImport[]> {
  return selectRows<StoredImport>(
    tx,
    `select ${columns} from ${source}
     where ${isVisible} and m.state <> 'discarded'
       and ($categoryId::int is null
         or exists (select from import_category c where c.import_id = m.id and c.category_id = $categoryId::int)
         or not exists (select from import_category c where c.import_id = m.id))
     order by m.id desc limit 200`,
    { ...onlooker, categoryId },
  );
}

export async function insertImport(tx: Tx, row: { fileId: number; sha256: string; actorId: number }): Promise<number> {
  const inserted = await selectRow<{ id: number }>(
    tx,
    `insert into "import" (file_id, sha256, state, actor_id) values ($fileId, $sha256, 'reading', $actorId) returning id`,
    row,
  );
  if (!inserted) throw new Error('the import was not stored');
  return inserted.id;
}

export async function setState(tx: Tx, id: number, state: ImportState): Promise<void> {
  await execute(tx, `update "import" set state = $state where id = $id`, { id, state });
}

export async function setMapping(tx: Tx, id: number, mapping: ImportMapping): Promise<void> {
  await execute(
    tx,
    `update "import" set mapping = $mapping::jsonb, kind = $kind, state = 'reading', refusal = null where id = $id`,
    {
      id,
      mapping: toJsonText(mapping),
      kind: mapping.kind,
    },
  );
}

export async function setRefused(tx: Tx, id: number, refusal: string): Promise<void> {
  await execute(tx, `update "import" set state = 'refused', refusal = $refusal, totals = null where id = $id`, {
    id,
    refusal,
  });
}

export async function setRead(
  tx: Tx,
  id: number,
  read: { mapping: ImportMapping; totals: ImportTotals | null; preview: ImportPreview },
): Promise<void> {
  await execute(
    tx,
    `update "import" set state = 'to-check', kind = $kind, mapping = $mapping::jsonb, totals = $totals::jsonb, preview = $preview::jsonb, refusal = null
     where id = $id`,
    {
      id,
      kind: read.mapping.kind,
      mapping: toJsonText(read.mapping),
      totals: read.totals === null ? null : toJsonText(read.totals),
      preview: toJsonText(read.preview),
    },
  );
}

export async function setAccepted(tx: Tx, id: number, actorId: number, totals: ImportTotals): Promise<void> {
  await execute(
    tx,
    `update "import" set state = 'accepted', accepted_at = now(), accepted_by = $actorId, totals = $totals::jsonb where id = $id`,
    { id, actorId, totals: toJsonText(totals) },
  );
}

export async function setWithdrawn(tx: Tx, id: number, actorId: number, why: string): Promise<void> {
  await execute(
    tx,
    `update "import" set state = 'withdrawn', withdrawn_at = now(), withdrawn_by = $actorId, withdrawn_why = $why where id = $id`,
    { id, actorId, why },
  );
}

export async function replaceCategories(tx: Tx, id: number, categoryIds: readonly number[]): Promise<void> {
  await execute(tx, `delete from import_category where import_id = $id`, { id });
  await execute(
    tx,
    `insert into import_category (import_id, category_id) select $id::int, unnest($categoryIds::int[])`,
    { id, categoryIds },
  );
}

const findingsAtOnce = 5_000;

export async function replaceFindings(
  tx: Tx,
  id: number,
  findings: readonly (ImportFinding & { rowValues: string[] | null })[],
): Promise<void> {
  await execute(tx, `delete from import_finding where import_id = $id`, { id });
  for (let start = 0; start < findings.length; start += findingsAtOnce) {
    await execute(
      tx,
      `insert into import_finding (import_id, sheet, cell, row, kind, before, after, verdict, detail, row_values)
       select $id::int, sheet, cell, row, kind, before, after, verdict, detail, "rowValues"
       from jsonb_to_recordset($findings::jsonb) as f(sheet text, cell text, row int, kind text, before text, after text, verdict text, detail text, "rowValues" jsonb)`,
      { id, findings: toJsonText(findings.slice(start, start + findingsAtOnce)) },
    );
  }
}

/** The first findings: what stops an acceptance, then refused rows, then the rest. */
export function listFindings(tx: Tx, id: number, count: number): Promise<ImportFinding[]> {
  return selectRows<ImportFinding>(
    tx,
    `select sheet, cell, row, kind, before, after, verdict, detail from import_finding where import_id = $id
     order by (kind = 'mapping-incomplete') desc, (row is null) desc, (verdict = 'refused') desc, id limit $count`,
    { id, count },
  );
}

export function countFindings(tx: Tx, id: number): Promise<{ kind: string; verdict: string; count: number }[]> {
  return selectRows(
    tx,
    `select kind, verdict, count(*)::int as count from import_finding where import_id = $id group by kind, verdict order by count(*) desc, kind`,
    { id },
  );
}

export interface RefusedRow {
  sheet: string | null;
  cell: string | null;
  row: number | null;
  detail: string;
  rowValues: string[] | null;
}

export function listRefusedRows(tx: Tx, id: number): Promise<RefusedRow[]> {
  return selectRows<RefusedRow>(
    tx,
    `select sheet, cell, row, detail, row_values as "rowValues" from import_finding
     where import_id = $id and verdict = 'refused' order by id`,
    { id },
  );
}

/** An accepted import of the same bytes that the onlooker may know of. */
export async function findSameFile(
  tx: Tx,
  { id, sha256 }: { id: number; sha256: string },
  onlooker: Onlooker,
): Promise<number | null> {
  const row = await selectRow<{ id: number }>(
    tx,
    `select m.id from "import" m where m.sha256 = $sha256 and m.id <> $id and m.state = 'accepted' and ${isVisible} order by m.id desc limit 1`,
    { id, sha256, ...onlooker },
  );
  return row?.id ?? null;
}

/** Mapping of the newest accepted file whose columns are named alike. */
export async function recallMapping(tx: Tx, fingerprint: string, onlooker: Onlooker): Promise<ImportMapping | null> {
  const row = await selectRow<{ mapping: ImportMapping }>(
    tx,
    `select m.mapping from "import" m
     where m.accepted_at is not null and m.preview ->> 'fingerprint' = $fingerprint and ${isVisible} order by m.accepted_at desc limit 1`,
    { fingerprint, ...onlooker },
  );
  return row?.mapping ?? null;
}

export async function selectFirstWeekday(tx: Tx): Promise<number | null> {
  const row = await selectRow<{ weekday: number | null }>(
    tx,
    `select value::int as weekday from setting where name = 'firstWeekday' and jsonb_typeof(value) = 'number'`,
  );
  return row?.weekday ?? null;
}

/** Weeks of the lines that are locked in a plan now. */
export async function listLockedWeeks(
  tx: Tx,
  bind: { lineIds: readonly number[]; firstWeek: string; lastWeek: string },
): Promise<string[]> {
  const rows = await selectRows<{ week: string }>(
    tx,
    `select distinct to_char(week_start, 'YYYY-MM-DD') as week from locked_week
     where line_id = any($lineIds::int[]) and week_start between $firstWeek::date and $lastWeek::date order by 1`,
    bind,
  );
  return rows.map(({ week }) => week);
}

/** The whole range with present memberships. */
export async function selectRange(tx: Tx): Promise<RangeSnapshot> {
  return {
    categories: await selectRows(tx, `select id, name from category order by id`),
    lines: await selectRows(tx, `select id, name, category_id as "categoryId" from product_line order by id`),
    items: await selectRows(
      tx,
      `select i.id, i.code, i.name, m.line_id as "lineId", p.category_id as "categoryId"
       from item i
       left join item_membership m on m.item_id = i.id and m.valid_to is null
       left join product_line p on p.id = m.line_id
       order by i.id`,
    ),
    locations: await selectRows(tx, `select id, code, name from location order by id`),
  };
}

import type { Pack } from '../../../shared/contracts/packs.ts';
import { selectRow, selectRows, type Tx } from '../../lib/database.ts';

interface PackRow extends Omit<Pack, 'at'> {
  at: Date;
}

const packColumns = `p.id, p.number, json_build_object('id', c.id, 'name', c.name) as category, p.first_week::text as "firstWeek", p.last_week::text as "lastWeek",
  f.file_name as "fileName", f.size_bytes::float8 as "sizeBytes", p.sha256, p.at, a.name as by, p.versions as lines, p.units, p.net_value as "netValue"`;
const packTables = `pack p join category c on c.id = p.category_id join stored_file f on f.id = p.file_id join person a on a.id = p.actor_id`;

export async function listPacks(tx: Tx, categoryId: number): Promise<Pack[]> {
  const rows = await selectRows<PackRow>(
    tx,
    `select ${packColumns} from ${packTables} where p.category_id = $categoryId order by p.number desc limit 200`,
    { categoryId },
  );
  return rows.map((row) => ({ ...row, at: row.at.toISOString() }));
}

export function findPackFile(
  tx: Tx,
  id: number,
): Promise<{ categoryId: number; fileId: number; fileName: string; sizeBytes: number; sha256: string } | null> {
  return selectRow(
    tx,
    `select p.category_id as "categoryId", p.file_id as "fileId", f.file_name as "fileName", f.size_bytes::float8 as "sizeBytes", p.sha256
     from pack p join stored_file f on f.id = p.file_id where p.id = $id`,
    { id },
  );
}

export interface LockedLine {
  id: number;
  name: string;
  lockedVersion: number | null;
  firstLockedWeek: string | null;
  lastLockedWeek: string | null;
  lockedBy: string | null;
  lockedAt: Date | null;
}

/** Lines of a category with the weeks of their newest lock that still holds. */
export function listLockedLines(tx: Tx, categoryId: number): Promise<LockedLine[]> {
  return selectRows<LockedLine>(
    tx,
    `select l.id, l.name, newest.version as "lockedVersion", held.first_week::text as "firstLockedWeek", held.last_week::text as "lastLockedWeek",
            a.name as "lockedBy", newest.at as "lockedAt"
     from product_line l
     left join lateral (select version, actor_id, at, event_id from locked_week k where k.line_id = l.id order by event_id desc limit 1) newest on true
     left join lateral (select min(week_start) as first_week, max(week_start) as last_week from locked_week k where k.line_id = l.id and k.version = newest.version) held on true
     left join person a on a.id = newest.actor_id
     where l.category_id = $categoryId order by lower(l.name)`,
    { categoryId },
  );
}

/** Takes the category's row, so that pack numbers are handed out one at a time. */
export async function lockCategory(tx: Tx, categoryId: number): Promise<{ name: string } | null> {
  return selectRow(tx, 'select name from category where id = $categoryId for update', { categoryId });
}

export async function nextPackNumber(tx: Tx, categoryId: number): Promise<number> {
  const row = await selectRow<{ number: number }>(
    tx,
    'select coalesce(max(number), 0) + 1 as number from pack where category_id = $categoryId',
    { categoryId },
  );
  return row?.number ?? 1;
}

export async function insertPack(
  tx: Tx,
  pack: {
    number: number;
    categoryId: number;
    firstWeek: string;
    lastWeek: string;
    versions: Pack['lines'];
    units: number;
    netValue: number | null;
    fileId: number;
    sha256: string;
    actorId: number;
  },
): Promise<number> {
  const row = await selectRow<{ id: number }>(
    tx,
    `insert into pack (number, category_id, first_week, last_week, versions, units, net_value, file_id, sha256, actor_id)
     values ($number, $categoryId, $firstWeek, $lastWeek, $versions::jsonb, $units, $netValue, $fileId, $sha256, $actorId) returning id`,
    { ...pack, versions: JSON.stringify(pack.versions) },
  );
  if (!row) throw new Error('pack was not stored');
  return row.id;
}

/** Whether prices and net value of the category's sales in force hold VAT; null where imports differ or nothing is in. */
export async function isVatIncluded(tx: Tx, categoryId: number): Promise<boolean | null> {
  const rows = await selectRows<{ included: boolean | null }>(
    tx,
    `select distinct (i.mapping->>'valueIncludesVat')::boolean as included
     from "import" i join import_category c on c.import_id = i.id
     where c.category_id = $categoryId and i.kind = 'sales' and i.state = 'accepted'`,
    { categoryId },
  );
  return rows.length === 1 ? (rows[0]?.included ?? null) : null;
}

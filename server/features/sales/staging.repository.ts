import { createReadStream } from 'node:fs';
import { pipeline } from 'node:stream/promises';
import type pg from 'pg';
import { from as copyFrom } from 'pg-copy-streams';
import type { ImportTotals } from '../../../shared/contracts/sales.ts';
import { execute, selectRow, selectRows, type Tx } from '../../lib/database.ts';
import type { PlannedRow } from '../calendar/calendar.service.ts';
import { toJsonText } from './json-text.ts';
import type { FileItem, FileLocation } from './range-resolver.ts';
import { stagedColumns } from './staging-file.ts';

/** Any constant: accepting and withdrawing go one after the other, so that "the newest accepted" is always one and the same. */
const mergeLock = 4_310_003;

/** Waits for other merges to end; held until the transaction ends. */
export async function lockMerges(tx: Tx): Promise<void> {
  await execute(tx, `select pg_advisory_xact_lock($mergeLock)`, { mergeLock });
}

/** Makes the months that sales from `first` to `last` need. In a transaction of its own: it takes a lock on the whole table. */
export async function ensureSalesMonths(tx: Tx, first: string, last: string): Promise<void> {
  await execute(tx, `select ensure_sales_months($first::date, $last::date)`, { first, last });
}

/**
 * Pours a staging file into temporary tables of this transaction: `import_row` with the rows, `import_item` and `import_location` with what their
 * positions stand for. They are gone when the transaction ends.
 */
export async function pourRows(
  tx: Tx,
  path: string,
  items: readonly FileItem[],
  locations: readonly FileLocation[],
): Promise<void> {
  // The rows of a large file are sorted in memory; with PostgreSQL's default of 4 MB they would go through the disk.
  await execute(tx, `set local work_mem = '64MB'`);
  await execute(
    tx,
    `create temporary table import_row (
       file_row integer, item_position integer, location_position integer, week_start date, units double precision, net_value double precision,
       price double precision, regular_price double precision, depth double precision, feature real, display real, mechanics jsonb, gap real,
       days_open real, promotion_name text
     ) on commit drop`,
  );
  // Sequelize has no COPY; its transaction runs on this connection.
  const { connection } = tx as Tx & { connection: pg.PoolClient };
  await pipeline(
    createReadStream(path, { highWaterMark: 1 << 20 }),
    connection.query(copyFrom(`copy import_row (${stagedColumns.join(', ')}) from stdin`)),
  );
  await execute(
    tx,
    `create temporary table import_item on commit drop as
     select position, id as item_id, code, name, "categoryId" as category_id, "lineId" as line_id, "lineName" as line_name, id is null as is_new
     from jsonb_to_recordset($items::jsonb) as i(position int, id int, code text, name text, "categoryId" int, "lineId" int, "lineName" text)`,
    { items: toJsonText(items.map((item, position) => ({ ...item, position }))) },
  );
  await execute(
    tx,
    `create temporary table import_location on commit drop as
     select position, id as location_id, code from jsonb_to_recordset($locations::jsonb) as l(position int, id int, code text)`,
    { locations: toJsonText(locations.map((location, position) => ({ ...location, position }))) },
  );
  await execute(tx, `analyze import_row, import_item, import_location`);
}

/** Takes out rows that repeat a key under another spelling of its item or location; the first of each stays. */
export async function removeRepeatedKeys(tx: Tx): Promise<{ row: number; code: string }[]> {
  return selectRows(
    tx,
    `with repeated as (
       delete from import_row where ctid in (
         select ctid from (
           select ctid, row_number() over (partition by item_position, location_position, week_start order by file_row) as place from import_row
         ) numbered where place > 1
       ) returning file_row, item_position
     )
     select r.file_row as row, i.code from repeated r join import_item i on i.position = r.item_position order by 1`,
  );
}

type RowTotals = Pick<
  ImportTotals,
  'rowsTaken' | 'weeks' | 'items' | 'locations' | 'units' | 'netValue' | 'firstWeek' | 'lastWeek'
>;

/** Control totals of the rows poured, added up in decimals as a spreadsheet shows them. */
export async function totalRows(tx: Tx): Promise<RowTotals> {
  const row = await selectRow<RowTotals>(
    tx,
    `select count(*)::int as "rowsTaken", coalesce(sum(units::numeric), 0)::float8 as units,
            coalesce(sum(coalesce(net_value, units * price)::numeric), 0)::float8 as "netValue",
            to_char(min(week_start), 'YYYY-MM-DD') as "firstWeek", to_char(max(week_start), 'YYYY-MM-DD') as "lastWeek",
            (select count(*) from (select from import_row group by week_start) w)::int as weeks,
            (select count(*) from (select from import_row group by item_position) i)::int as items,
            (select count(*) from (select from import_row group by location_position) l)::int as locations
     from import_row`,
  );
  if (!row) throw new Error('an aggregate without groups always gives a row');
  return row;
}

/** How many of the rows' keys are held, and for how many of these the rows say something else. */
export async function compareRows(tx: Tx): Promise<Pick<ImportTotals, 'keysHeld' | 'keysChanged'>> {
  const row = await selectRow<Pick<ImportTotals, 'keysHeld' | 'keysChanged'>>(
    tx,
    `select count(*)::int as "keysHeld",
            count(*) filter (where (r.units, r.net_value, r.price, r.regular_price, r.feature, r.display, r.gap, r.days_open, r.mechanics)
              is distinct from (w.units, w.net_value, w.price, w.regular_price, w.feature, w.display, w.gap, w.days_open, w.mechanics))::int as "keysChanged"
     from import_row r
     join import_item i on i.position = r.item_position
     join import_location l on l.position = r.location_position
     join sales_week w on w.item_id = i.item_id and w.location_id = l.location_id and w.week_start = r.week_start`,
  );
  return row ?? { keysHeld: 0, keysChanged: 0 };
}

/** Units of the file by week, beside those held before for the same keys. */
export function totalRowsByWeek(tx: Tx): Promise<ImportTotals['byWeek']> {
  return selectRows(
    tx,
    `select to_char(r.week_start, 'YYYY-MM-DD') as "weekStart", coalesce(sum(r.units::numeric), 0)::float8 as units, sum(w.units::numeric)::float8 as "unitsHeld", count(*)::int as rows
     from import_row r
     join import_item i on i.position = r.item_position
     join import_location l on l.position = r.location_position
     left join sales_week w on w.item_id = i.item_id and w.location_id = l.location_id and w.week_start = r.week_start
     group by r.week_start order by r.week_start`,
  );
}

/** Makes the lines and items that the poured rows name and nobody knows; somebody else may have made them meanwhile. */
export async function createMissingItems(tx: Tx): Promise<void> {
  await execute(
    tx,
    `insert into product_line (category_id, name)
     select distinct on (category_id, lower(line_name)) category_id, line_name from import_item
     where is_new and line_id is null and line_name is not null and category_id is not null
     order by category_id, lower(line_name), position
     on conflict (category_id, lower(name)) do nothing`,
  );
  await execute(
    tx,
    `update import_item i set line_id = p.id from product_line p
     where i.is_new and i.line_id is null and p.category_id = i.category_id and lower(p.name) = lower(i.line_name)`,
  );
  // Whole units unless the file's own figures have decimals; then steps of a tenth, hundredth or thousandth.
  await execute(
    tx,
    `insert into item (code, name, unit_step)
     select i.code, i.name, case when s.places = 0 then 1 when s.places = 1 then 0.1 when s.places = 2 then 0.01 else 0.001 end
     from import_item i
     join (
       select item_position, max(least(3, coalesce(scale(trim_scale(units::numeric)), 0))) as places from import_row group by item_position
     ) s on s.item_position = i.position
     where i.is_new and i.line_id is not null
     order by i.position
     on conflict (lower(code)) do nothing`,
  );
  await execute(
    tx,
    `update import_item i set item_id = t.id from item t where i.is_new and lower(t.code) = lower(i.code)`,
  );
  // Long before any week, so that history is whole.
  await execute(
    tx,
    `insert into item_membership (item_id, line_id, valid_from)
     select i.item_id, i.line_id, date '1900-01-01' from import_item i
     where i.is_new and i.item_id is not null and i.line_id is not null
       and not exists (select from item_membership m where m.item_id = i.item_id)`,
  );
}

/** Makes the locations that nobody knows yet; `onlyCode` (lower case) = only that one. */
export async function createMissingLocations(tx: Tx, onlyCode: string | null): Promise<void> {
  await execute(
    tx,
    `insert into location (code, name) select code, code from import_location
     where location_id is null and ($onlyCode::text is null or lower(code) = $onlyCode::text) order by position
     on conflict (lower(code)) do nothing`,
    { onlyCode },
  );
  await execute(
    tx,
    `update import_location i set location_id = l.id from location l where i.location_id is null and lower(l.code) = lower(i.code)`,
  );
}

/** Takes out rows whose item or location still isn't known; returns how many. */
export async function removeUnknownRows(tx: Tx): Promise<number> {
  const row = await selectRow<{ count: number }>(
    tx,
    `with removed as (
       delete from import_row r using import_item i, import_location l
       where i.position = r.item_position and l.position = r.location_position and (i.item_id is null or l.location_id is null)
       returning 1
     )
     select count(*)::int as count from removed`,
  );
  return row?.count ?? 0;
}

export async function insertSalesRevision(
  tx: Tx,
  row: { importId: number; change: 'accept' | 'withdraw'; actorId: number },
): Promise<number> {
  const inserted = await selectRow<{ id: number }>(
    tx,
    `insert into sales_revision (import_id, change, actor_id) values ($importId, $change, $actorId) returning id`,
    row,
  );
  if (!inserted) throw new Error('the revision was not stored');
  return inserted.id;
}

const measures = 'units, net_value, price, regular_price, feature, display, mechanics, gap, days_open';

/** Appends the poured rows to the entries and puts them in force; the latter in key order, so that neighbouring index pages are written once. */
export async function mergeSales(tx: Tx, importId: number, revisionId: number): Promise<void> {
  const source = `from import_row r
     join import_item i on i.position = r.item_position
     join import_location l on l.position = r.location_position`;
  const columns = `import_id, revision_id, item_id, location_id, week_start, ${measures}`;
  const values = `$importId::int, $revisionId::int, i.item_id, l.location_id, r.week_start, ${measures}`;
  await execute(tx, `insert into sales_entry (${columns}, file_row) select ${values}, file_row ${source}`, {
    importId,
    revisionId,
  });
  await execute(
    tx,
    `insert into sales_week (${columns}) select ${values} ${source} order by i.item_id, l.location_id, r.week_start
     on conflict (item_id, location_id, week_start) do update set (import_id, revision_id, ${measures}) =
       (excluded.import_id, excluded.revision_id, ${measures
         .split(', ')
         .map((name) => `excluded.${name}`)
         .join(', ')})`,
    { importId, revisionId },
  );
}

/**
 * Takes an import's rows out of force and puts the newest accepted entry of each key they held in their place. The import must be marked withdrawn
 * already. Returns how many keys were touched and how many of them have an entry again.
 */
export async function restoreEarlierSales(tx: Tx, importId: number): Promise<{ touched: number; restored: number }> {
  const span = await selectRow<{ first: string | null; last: string | null }>(
    tx,
    `select to_char(min(week_start), 'YYYY-MM-DD') as first, to_char(max(week_start), 'YYYY-MM-DD') as last from sales_entry where import_id = $importId`,
    { importId },
  );
  const weeks = { first: span?.first ?? null, last: span?.last ?? null };
  await execute(
    tx,
    `create temporary table withdrawn_key on commit drop as
     select w.item_id, w.location_id, w.week_start
     from sales_entry e join sales_week w using (item_id, location_id, week_start)
     where e.import_id = $importId and w.import_id = $importId and e.week_start between $first::date and $last::date`,
    { importId, ...weeks },
  );
  await execute(tx, `analyze withdrawn_key`);
  await execute(
    tx,
    `delete from sales_week w using withdrawn_key k
     where w.item_id = k.item_id and w.location_id = k.location_id and w.week_start = k.week_start`,
  );
  const row = await selectRow<{ touched: number; restored: number }>(
    tx,
    `with restored as (
       insert into sales_week (item_id, location_id, week_start, import_id, revision_id, ${measures})
       select distinct on (e.item_id, e.location_id, e.week_start) e.item_id, e.location_id, e.week_start, e.import_id, e.revision_id, ${measures}
       from sales_entry e
       join withdrawn_key k using (item_id, location_id, week_start)
       join "import" m on m.id = e.import_id and m.state = 'accepted'
       where e.week_start between $first::date and $last::date
       order by e.item_id, e.location_id, e.week_start, e.revision_id desc
       returning 1
     )
     select (select count(*) from withdrawn_key)::int as touched, (select count(*) from restored)::int as restored`,
    weeks,
  );
  return row ?? { touched: 0, restored: 0 };
}

/** Settles the first day of the trading week, once. */
export async function fixFirstWeekday(tx: Tx, weekday: number): Promise<void> {
  await execute(
    tx,
    `update setting set value = to_jsonb($weekday::int) where name = 'firstWeekday' and jsonb_typeof(value) <> 'number'`,
    { weekday },
  );
}

/** Categories of the items whose rows were poured. */
export async function listPouredCategories(tx: Tx): Promise<number[]> {
  const rows = await selectRows<{ id: number }>(
    tx,
    `select distinct i.category_id as id from import_item i
     where i.category_id is not null and exists (select from import_row r where r.item_position = i.position) order by 1`,
  );
  return rows.map(({ id }) => id);
}

/** The poured rows of a calendar file, by item, location and week. */
export function selectPlannedRows(tx: Tx): Promise<PlannedRow[]> {
  return selectRows<PlannedRow>(
    tx,
    `select i.item_id as "itemId", l.location_id as "locationId", to_char(r.week_start, 'YYYY-MM-DD') as "weekStart", r.price,
            r.regular_price as "regularPrice", r.depth, r.feature::float8 as feature, r.display::float8 as display, r.mechanics,
            r.promotion_name as "promotionName"
     from import_row r
     join import_item i on i.position = r.item_position
     join import_location l on l.position = r.location_position
     where i.item_id is not null
     order by i.item_id, l.location_id nulls first, r.week_start`,
  );
}

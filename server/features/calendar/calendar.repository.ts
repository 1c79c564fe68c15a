import { execute, selectRow, selectRows, type Tx } from '../../lib/database.ts';
import type { PlannedPrice } from './planned-rows.ts';
import type { PromotionRun } from './promotion-runs.ts';

export interface PromotionWeekRow {
  itemId: number;
  locationId: number;
  weekStart: string;
  name: string;
  depth: number | null;
  price: number | null;
  feature: number;
  display: number;
  mechanics: Record<string, number>;
}

const notWithdrawn = (entry: string) =>
  `(${entry}.import_id is null or ${entry}.import_id not in (select id from calendar_import_out))`;

/** Promotions in force by item, location and week; an entry for every location counts at each of the locations asked for. */
export function selectPromotionWeeks(
  tx: Tx,
  bind: { itemIds: readonly number[]; locationIds: readonly number[]; firstWeek: string; lastWeek: string },
): Promise<PromotionWeekRow[]> {
  return selectRows<PromotionWeekRow>(
    tx,
    `select item_id as "itemId", location_id as "locationId", to_char(week_start, 'YYYY-MM-DD') as "weekStart",
            name, depth, price, feature::float8 as feature, display::float8 as display, mechanics
     from (
       select distinct on (of_item, of_location, w.week_start) of_item as item_id, of_location as location_id, w.week_start,
              p.name, p.depth, p.price, p.feature, p.display, p.mechanics, p.is_none
       from promotion_entry p
       cross join lateral unnest(p.item_ids) as of_item
       cross join lateral unnest(coalesce(p.location_ids, $locationIds::int[])) as of_location
       cross join lateral generate_series(p.first_week::timestamp, p.last_week::timestamp, interval '7 days') as w(week_start)
       where p.item_ids && $itemIds::int[] and p.first_week <= $lastWeek::date and p.last_week >= $firstWeek::date
         and of_item = any($itemIds::int[]) and of_location = any($locationIds::int[])
         and w.week_start between $firstWeek::date and $lastWeek::date
         and ${notWithdrawn('p')}
       order by of_item, of_location, w.week_start, p.revision_id desc, p.id desc
     ) newest
     where not is_none
     order by item_id, location_id, week_start`,
    bind,
  );
}

export interface PlannedPriceRow {
  itemId: number;
  locationId: number;
  /** From this week on, until the series' next row. */
  weekStart: string;
  regularPrice: number;
}

/**
 * Planned regular prices of series up to lastWeek. An entry that starts no later than the newest week before firstWeek whose sold regular
 * price is known has been overtaken by what was sold, and is left out.
 */
export function selectPlannedPrices(
  tx: Tx,
  bind: { itemIds: readonly number[]; locationIds: readonly number[]; firstWeek: string; lastWeek: string },
): Promise<PlannedPriceRow[]> {
  return selectRows<PlannedPriceRow>(
    tx,
    `with stated as (
       select distinct on (p.item_id, of_location, p.first_week) p.item_id, of_location as location_id, p.first_week, p.regular_price
       from price_entry p
       cross join lateral unnest(case when p.location_id is null then $locationIds::int[] else array[p.location_id] end) as of_location
       where p.item_id = any($itemIds::int[]) and of_location = any($locationIds::int[]) and p.first_week <= $lastWeek::date
         and ${notWithdrawn('p')}
       order by p.item_id, of_location, p.first_week, p.revision_id desc, (p.location_id is not null) desc, p.id desc
     )
     select item_id as "itemId", location_id as "locationId", to_char(first_week, 'YYYY-MM-DD') as "weekStart", regular_price as "regularPrice"
     from stated
     where not exists (
       select from sales_week w
       where w.item_id = stated.item_id and w.location_id = stated.location_id and w.week_start >= stated.first_week
         and w.week_start < $firstWeek::date and w.regular_price is not null
     )
     order by item_id, location_id, first_week`,
    bind,
  );
}

export interface PriceInForceRow {
  itemId: number;
  locationId: number | null;
  weekStart: string;
  regularPrice: number;
}

/** Price changes in force that begin in the window, and the last one before it. */
export function selectPriceChanges(
  tx: Tx,
  bind: { itemIds: readonly number[]; firstWeek: string; lastWeek: string },
): Promise<PriceInForceRow[]> {
  return selectRows<PriceInForceRow>(
    tx,
    `with stated as (
       select p.item_id, p.location_id, p.first_week, p.regular_price,
              lead(p.first_week) over (partition by p.item_id, p.location_id order by p.first_week) as next_week
       from price_in_force p
       where p.item_id = any($itemIds::int[]) and p.first_week <= $lastWeek::date
     )
     select item_id as "itemId", location_id as "locationId", to_char(first_week, 'YYYY-MM-DD') as "weekStart", regular_price as "regularPrice"
     from stated where first_week >= $firstWeek::date or next_week is null or next_week > $firstWeek::date
     order by item_id, location_id nulls first, first_week`,
    bind,
  );
}

export async function selectCurrentRevision(tx: Tx): Promise<number | null> {
  const row = await selectRow<{ id: number | null }>(tx, `select max(id) as id from calendar_revision`);
  return row?.id ?? null;
}

export async function selectHolidaySettings(tx: Tx): Promise<{ country: string; firstWeekday: number | null }> {
  const row = await selectRow<{ country: string | null; firstWeekday: number | null }>(
    tx,
    `select (select value #>> '{}' from setting where name = 'holidayCountry') as country,
            (select value from setting where name = 'firstWeekday' and jsonb_typeof(value) = 'number')::int as "firstWeekday"`,
  );
  return { country: row?.country ?? '', firstWeekday: row?.firstWeekday ?? null };
}

/** Own events in force that touch the days from first to last. */
export function selectEvents(
  tx: Tx,
  first: string,
  last: string,
): Promise<{ name: string; firstDay: string; lastDay: string }[]> {
  return selectRows(
    tx,
    `select name, to_char(first_day, 'YYYY-MM-DD') as "firstDay", to_char(last_day, 'YYYY-MM-DD') as "lastDay"
     from (select distinct on (event) * from event_entry order by event, revision_id desc, id desc) newest
     where not is_none and first_day <= $last::date and last_day >= $first::date order by first_day, name`,
    { first, last },
  );
}

export interface RangeRow {
  categoryId: number;
  categoryName: string;
  lineId: number | null;
  lineName: string | null;
  items: { id: number; name: string }[];
}

/** A category with its lines and their present items, if it lies in the scope (null = all categories). */
export function selectRange(tx: Tx, categoryId: number, categories: readonly number[] | null): Promise<RangeRow[]> {
  return selectRows<RangeRow>(
    tx,
    `select c.id as "categoryId", c.name as "categoryName", p.id as "lineId", p.name as "lineName",
            coalesce(jsonb_agg(jsonb_build_object('id', i.id, 'name', i.name) order by i.name, i.id) filter (where i.id is not null), '[]') as items
     from category c
     left join product_line p on p.category_id = c.id
     left join item_membership m on m.line_id = p.id and m.valid_to is null
     left join item i on i.id = m.item_id
     where c.id = $categoryId and ($categories::int[] is null or c.id = any($categories::int[]))
     group by c.id, c.name, p.id, p.name order by p.name`,
    { categoryId, categories },
  );
}

/** Where the items are sold, listed or planned. */
export function selectLocations(tx: Tx, itemIds: readonly number[]): Promise<{ id: number; name: string }[]> {
  return selectRows(
    tx,
    `select id, name from location where id in (
       select location_id from sales_week where item_id = any($itemIds::int[])
       union select location_id from listing where item_id = any($itemIds::int[])
       union select unnest(location_ids) from promotion_entry where item_ids && $itemIds::int[]
       union select location_id from price_entry where item_id = any($itemIds::int[])
     ) order by name, id`,
    { itemIds },
  );
}

/** The last week with sales of the items. */
export async function selectLastSalesWeek(tx: Tx, itemIds: readonly number[]): Promise<string | null> {
  const row = await selectRow<{ week: string | null }>(
    tx,
    `select to_char(max(week_start), 'YYYY-MM-DD') as week from sales_week where item_id = any($itemIds::int[])`,
    { itemIds },
  );
  return row?.week ?? null;
}

export async function insertRevision(
  tx: Tx,
  row: { importId: number | null; change: 'accept' | 'withdraw' | 'edit'; actorId: number; note: string | null },
): Promise<number> {
  const inserted = await selectRow<{ id: number }>(
    tx,
    `insert into calendar_revision (import_id, change, actor_id, note) values ($importId, $change, $actorId, $note) returning id`,
    row,
  );
  if (!inserted) throw new Error('the revision was not stored');
  return inserted.id;
}

/** Appends promotions; locationIds null = every location, isNone = there is none in these weeks. */
export async function insertPromotions(
  tx: Tx,
  revision: { revisionId: number; importId: number | null },
  runs: readonly (Omit<PromotionRun, 'locationIds'> & { locationIds: number[] | null; isNone: boolean })[],
): Promise<void> {
  if (runs.length === 0) return;
  await execute(
    tx,
    `insert into promotion_entry
       (revision_id, import_id, promotion, name, item_ids, location_ids, first_week, last_week, depth, price, feature, display, mechanics, is_none)
     select $revisionId::int, $importId::int, name, name, "itemIds", "locationIds", "firstWeek", "lastWeek", depth, price, feature, display, mechanics, "isNone"
     from jsonb_to_recordset($runs::jsonb) as r(name text, "itemIds" int[], "locationIds" int[], "firstWeek" date, "lastWeek" date, depth float8, price float8,
       feature real, display real, mechanics jsonb, "isNone" boolean)`,
    { ...revision, runs: JSON.stringify(runs) },
  );
}

export async function insertPrices(
  tx: Tx,
  revision: { revisionId: number; importId: number | null },
  prices: readonly PlannedPrice[],
): Promise<void> {
  if (prices.length === 0) return;
  await execute(
    tx,
    `insert into price_entry (revision_id, import_id, item_id, location_id, first_week, regular_price)
     select $revisionId::int, $importId::int, "itemId", "locationId", "firstWeek", "regularPrice"
     from jsonb_to_recordset($prices::jsonb) as p("itemId" int, "locationId" int, "firstWeek" date, "regularPrice" float8)`,
    { ...revision, prices: JSON.stringify(prices) },
  );
}

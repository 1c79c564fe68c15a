import { selectRow, selectRows, type Tx } from '../../lib/database.ts';

/** Columns of a series' sales in force; arrays run over the weeks sold, ascending. */
export interface SeriesRow {
  itemId: number;
  itemCode: string;
  itemName: string;
  unitStep: number;
  locationId: number;
  locationCode: string;
  locationName: string;
  listedFrom: string | null;
  listedTo: string | null;
  weeks: string[];
  units: number[];
  prices: (number | null)[];
  regularPrices: (number | null)[];
  netValues: (number | null)[];
  features: (number | null)[];
  displays: (number | null)[];
  gaps: (number | null)[];
  daysOpen: (number | null)[];
  /** null where no week of the series has any. */
  mechanics: (Record<string, number> | null)[] | null;
}

/** One row per series of the line's present items, with its weeks inside the item's membership up to and including `through` (null = all). */
export function selectLineHistory(tx: Tx, lineId: number, through: string | null): Promise<SeriesRow[]> {
  return selectRows<SeriesRow>(
    tx,
    `select i.id as "itemId", i.code as "itemCode", i.name as "itemName", i.unit_step::float8 as "unitStep",
            l.id as "locationId", l.code as "locationCode", l.name as "locationName",
            listed.first_day::text as "listedFrom", listed.last_day::text as "listedTo",
            s.weeks, s.units, s.prices, s.regular_prices as "regularPrices", s.net_values as "netValues", s.features, s.displays, s.gaps,
            s.days_open as "daysOpen", s.mechanics
     from (
       select w.item_id, w.location_id,
              array_agg(to_char(w.week_start, 'YYYY-MM-DD') order by w.week_start) as weeks,
              array_agg(w.units order by w.week_start) as units,
              array_agg(w.price order by w.week_start) as prices,
              array_agg(w.regular_price order by w.week_start) as regular_prices,
              array_agg(w.net_value order by w.week_start) as net_values,
              array_agg(w.feature::float8 order by w.week_start) as features,
              array_agg(w.display::float8 order by w.week_start) as displays,
              array_agg(w.gap::float8 order by w.week_start) as gaps,
              array_agg(w.days_open::float8 order by w.week_start) as days_open,
              case when count(w.mechanics) > 0 then jsonb_agg(w.mechanics order by w.week_start) end as mechanics
       from item_membership m
       join sales_week w on w.item_id = m.item_id and w.week_start >= m.valid_from and (m.valid_to is null or w.week_start < m.valid_to)
       where m.line_id = $lineId and ($through::date is null or w.week_start <= $through::date)
         and exists (
           select from item_membership present
           where present.item_id = m.item_id and present.line_id = m.line_id and (present.valid_to is null or present.valid_to > coalesce($through::date, 'infinity'))
         )
       group by w.item_id, w.location_id
     ) s
     join item i on i.id = s.item_id
     join location l on l.id = s.location_id
     left join lateral (
       select min(valid_from) as first_day, case when bool_and(valid_to is not null) then max(valid_to) - 1 end as last_day
       from listing where item_id = s.item_id and location_id = s.location_id
     ) listed on true
     order by i.code, l.code`,
    { lineId, through },
  );
}

/** Of a row `w` of sales_week: a feature, display or mechanic, or a price 5 % below the regular one. */
const isPromoted = `(coalesce(w.feature, 0) > 0 or coalesce(w.display, 0) > 0 or coalesce(w.price < 0.95 * w.regular_price, false)
  or exists (select from jsonb_each(w.mechanics) e where e.value::text::float8 > 0))`;

export interface SeriesWeeksRow {
  lineId: number;
  itemId: number;
  locationId: number;
  weeks: string[];
  units: number[];
  /** Positions in `weeks`, 1-based. */
  gapAt: number[] | null;
  promotedAt: number[] | null;
}

/** Weekly units of the present items of the lines, from firstWeek (inclusive) to endWeek (exclusive). */
export function selectSeriesWeeks(
  tx: Tx,
  lineIds: readonly number[],
  firstWeek: string,
  endWeek: string,
): Promise<SeriesWeeksRow[]> {
  return selectRows<SeriesWeeksRow>(
    tx,
    `with sold as (
       select m.line_id, w.item_id, w.location_id, w.week_start, w.units, coalesce(w.gap, 0) > 0 as is_gap,
              ${isPromoted} as is_promoted,
              row_number() over (partition by w.item_id, w.location_id order by w.week_start) as position
       from item_membership m
       join sales_week w on w.item_id = m.item_id and w.week_start >= m.valid_from and (m.valid_to is null or w.week_start < m.valid_to)
       where m.line_id = any($lineIds::int[]) and w.week_start >= $firstWeek::date and w.week_start < $endWeek::date
     )
     select line_id as "lineId", item_id as "itemId", location_id as "locationId",
            array_agg(to_char(week_start, 'YYYY-MM-DD') order by week_start) as weeks,
            array_agg(units order by week_start) as units,
            array_agg(position::int order by week_start) filter (where is_gap) as "gapAt",
            array_agg(position::int order by week_start) filter (where is_promoted) as "promotedAt"
     from sold group by line_id, item_id, location_id
     order by line_id, item_id, location_id`,
    { lineIds, firstWeek, endWeek },
  );
}

export interface ItemWeekRow {
  weekStart: string;
  units: number;
  isPromoted: boolean;
  depth: number | null;
  feature: number;
  display: number;
}

/**
 * Weeks of one item of a line over the locations, ascending, before endWeek: promoted where at least half the locations were, with the price cut over
 * those that were (by units, where prices are known), and the shares of locations with feature and display.
 */
export function selectItemWeeks(
  tx: Tx,
  given: { lineId: number; itemId: number; locationIds: readonly number[]; endWeek: string },
): Promise<ItemWeekRow[]> {
  return selectRows<ItemWeekRow>(
    tx,
    `with sold as (
       select w.week_start, w.units, w.price, w.regular_price, w.feature, w.display, ${isPromoted} as is_promoted
       from item_membership m
       join sales_week w on w.item_id = m.item_id and w.week_start >= m.valid_from and (m.valid_to is null or w.week_start < m.valid_to)
       where m.line_id = $lineId and m.item_id = $itemId and w.location_id = any($locationIds::int[]) and w.week_start < $endWeek::date
     )
     select to_char(week_start, 'YYYY-MM-DD') as "weekStart", sum(units) as units, avg(is_promoted::int) >= 0.5 as "isPromoted",
            1 - sum(price * units) filter (where is_promoted and units > 0 and price > 0 and regular_price > 0)
              / sum(regular_price * units) filter (where is_promoted and units > 0 and price > 0 and regular_price > 0) as depth,
            avg(coalesce(feature, 0))::float8 as feature, avg(coalesce(display, 0))::float8 as display
     from sold group by week_start order by week_start`,
    given,
  );
}

export interface WeekTotalRow {
  weekStart: string;
  units: number;
  isPromoted: boolean;
}

/** Units by week over a category or one line of it, ascending. */
export function selectCategoryWeeks(tx: Tx, categoryId: number, lineId: number | null = null): Promise<WeekTotalRow[]> {
  return selectRows<WeekTotalRow>(
    tx,
    `select to_char(w.week_start, 'YYYY-MM-DD') as "weekStart", sum(w.units) as units,
            bool_or(${isPromoted}) as "isPromoted"
     from sales_week w
     join item_membership m on m.item_id = w.item_id and w.week_start >= m.valid_from and (m.valid_to is null or w.week_start < m.valid_to)
     join product_line p on p.id = m.line_id
     where p.category_id = $categoryId and ($lineId::int is null or p.id = $lineId::int)
     group by w.week_start order by w.week_start`,
    { categoryId, lineId },
  );
}

export async function selectLastWeek(tx: Tx, categoryId: number): Promise<string | null> {
  const row = await selectRow<{ week: string | null }>(
    tx,
    `select to_char(max(newest.week_start), 'YYYY-MM-DD') as week
     from product_line p
     join item_membership m on m.line_id = p.id
     cross join lateral (
       select max(w.week_start) as week_start from sales_week w
       where w.item_id = m.item_id and w.week_start >= m.valid_from and (m.valid_to is null or w.week_start < m.valid_to)
     ) newest
     where p.category_id = $categoryId`,
    { categoryId },
  );
  return row?.week ?? null;
}

export async function selectCurrentRevision(tx: Tx): Promise<number | null> {
  const row = await selectRow<{ id: number | null }>(tx, `select max(id) as id from sales_revision`);
  return row?.id ?? null;
}

export interface HealthRow {
  firstWeek: string | null;
  lastWeek: string | null;
  items: number;
  locations: number;
  entriesInForce: number;
  gapWeeks: number;
  missingWeeks: number;
}

/** State of a category's data; missingWeeks = weeks between a series' first and last sale without an entry. */
export async function selectHealth(tx: Tx, categoryId: number): Promise<HealthRow> {
  const row = await selectRow<HealthRow>(
    tx,
    `with series as (
       select w.item_id, w.location_id, min(w.week_start) as first_week, max(w.week_start) as last_week, count(*) as weeks,
              count(*) filter (where w.gap > 0) as gaps
       from product_line p
       join item_membership m on m.line_id = p.id
       join sales_week w on w.item_id = m.item_id and w.week_start >= m.valid_from and (m.valid_to is null or w.week_start < m.valid_to)
       where p.category_id = $categoryId
       group by w.item_id, w.location_id
     )
     select to_char(min(first_week), 'YYYY-MM-DD') as "firstWeek", to_char(max(last_week), 'YYYY-MM-DD') as "lastWeek",
            count(distinct item_id)::int as items, count(distinct location_id)::int as locations,
            coalesce(sum(weeks), 0)::int as "entriesInForce", coalesce(sum(gaps), 0)::int as "gapWeeks",
            coalesce(sum((last_week - first_week) / 7 + 1 - weeks), 0)::int as "missingWeeks"
     from series`,
    { categoryId },
  );
  if (!row) throw new Error('an aggregate without groups always gives a row');
  return row;
}

import { addWeeks } from '../../shared/domain/weeks.ts';
import type { Database } from '../../server/lib/database.ts';

export interface SoldFacts {
  units: number;
  price?: number;
  regularPrice?: number;
  feature?: number;
  display?: number;
  gap?: number;
  mechanics?: Record<string, number>;
}

/** 20, 21, … around 30 with a slow wave and a promotion (25 % off, featured) each eighth week: positive, different by series, always the same. */
export function inventSoldWeek(series: number, week: number): SoldFacts {
  const isPromoted = week % 8 === 5;
  const level = 20 + 5 * series + Math.round(4 * Math.sin((2 * Math.PI * week) / 52)) + (week % 3);
  return {
    units: isPromoted ? 2 * level : level,
    price: isPromoted ? 1.5 : 2,
    regularPrice: 2,
    feature: isPromoted ? 1 : 0,
    display: 0,
    gap: 0,
  };
}

/**
 * Accepted sales of every item × location in `weeks` weeks from firstWeek on, as one import of `actorId`. factsOf gets the series' position
 * (items outside, locations inside) and the week's; null leaves the week out.
 */
export async function makeSales(
  database: Database,
  given: {
    actorId: number;
    categoryId: number;
    itemIds: readonly number[];
    locationIds: readonly number[];
    /** Default: 2025-01-06, a Monday. */
    firstWeek?: string;
    /** Default: 60. */
    weeks?: number;
    factsOf?: (series: number, week: number) => SoldFacts | null;
  },
): Promise<{ importId: number; revisionId: number; firstWeek: string; lastWeek: string }> {
  const {
    actorId,
    categoryId,
    itemIds,
    locationIds,
    firstWeek = '2025-01-06',
    weeks = 60,
    factsOf = inventSoldWeek,
  } = given;
  const rows = itemIds.flatMap((itemId, item) =>
    locationIds.flatMap((locationId, location) =>
      Array.from({ length: weeks }, (_, week) => {
        const facts = factsOf(item * locationIds.length + location, week);
        return facts === null ? [] : [{ itemId, locationId, weekStart: addWeeks(firstWeek, week), ...facts }];
      }).flat(),
    ),
  );
  const lastWeek = addWeeks(firstWeek, weeks - 1);
  const client = await database.pool.connect();
  try {
    await client.query('select ensure_sales_months($1, $2)', [firstWeek, lastWeek]);
    await client.query('begin');
    const file = await client.query<{ id: number }>(
      `insert into stored_file (file_name, size_bytes, sha256) values ('sales.csv', 0, md5(random()::text)) returning id`,
    );
    const made = await client.query<{ id: number }>(
      `insert into "import" (file_id, sha256, state, actor_id, accepted_at, accepted_by) values ($1, 'made', 'accepted', $2, now(), $2) returning id`,
      [file.rows[0]?.id, actorId],
    );
    const importId = made.rows[0]?.id ?? 0;
    await client.query('insert into import_category (import_id, category_id) values ($1, $2)', [importId, categoryId]);
    const revision = await client.query<{ id: number }>(
      `insert into sales_revision (import_id, change, actor_id) values ($1, 'accept', $2) returning id`,
      [importId, actorId],
    );
    const revisionId = revision.rows[0]?.id ?? 0;
    const columns = `import_id, revision_id, item_id, location_id, week_start, units, net_value, price, regular_price, feature, display, mechanics, gap`;
    for (const table of ['sales_entry', 'sales_week']) {
      await client.query(
        `insert into ${table} (${columns})
         select $1, $2, "itemId", "locationId", "weekStart", units, units * price, price, "regularPrice", feature, display, mechanics, gap
         from jsonb_to_recordset($3::jsonb) as r("itemId" int, "locationId" int, "weekStart" date, units float8, price float8, "regularPrice" float8,
           feature real, display real, mechanics jsonb, gap real)
         ${
           table === 'sales_week'
             ? `on conflict (item_id, location_id, week_start) do update set (import_id, revision_id, units, net_value, price, regular_price, feature, display, mechanics, gap)
           = (excluded.import_id, excluded.revision_id, excluded.units, excluded.net_value, excluded.price, excluded.regular_price, excluded.feature, excluded.display, excluded.mechanics, excluded.gap)`
             : ''
         }`,
        [importId, revisionId, JSON.stringify(rows)],
      );
    }
    const weekday = new Date(`${firstWeek}T00:00:00Z`).getUTCDay();
    await client.query(
      `update setting set value = to_jsonb($1::int) where name = 'firstWeekday' and jsonb_typeof(value) <> 'number'`,
      [weekday],
    );
    await client.query('commit');
    return { importId, revisionId, firstWeek, lastWeek };
  } catch (error) {
    await client.query('rollback');
    throw error;
  } finally {
    client.release();
  }
}

import { randomBytes } from 'node:crypto';
import type { DemoCategory } from '../../../seed-data/company.ts';
import { firstWeek } from '../../../seed-data/company.ts';
import { createPersonWithPassword } from '../../features/accounts/accounts.service.ts';
import { createCategory } from '../../features/lines/lines.service.ts';
import type { Actor } from '../../lib/authorise.ts';
import { inTransaction, openDatabase, type Database } from '../../lib/database.ts';
import { migrate } from '../../lib/migrate.ts';
import { createDatabase, databaseUrl, ensureCluster, withClient, type Cluster } from '../cluster.ts';
import { locationCode, seam, tellLines } from './invented-range.ts';

/** A database of the bench's own cluster, dropped at its end. */
export interface BenchDatabase {
  name: string;
  cluster: Cluster;
  database: Database;
  actor: Actor;
}

/** Starts the bench's cluster, makes a migrated database in it, hands it to `work`, and drops and stops what it started. */
export async function withBenchDatabase<T>(work: (given: BenchDatabase) => Promise<T>): Promise<T> {
  const cluster = await ensureCluster('bench');
  const name = `bench_${process.pid}_${randomBytes(4).toString('hex')}`;
  try {
    await createDatabase(cluster, name);
    await migrate(databaseUrl(cluster, 'fairweek_migrator', name));
    const database = openDatabase(databaseUrl(cluster, 'fairweek_application', name), { poolSize: 12 });
    try {
      const actor = await inTransaction(database, (tx) =>
        createPersonWithPassword(tx, {
          name: 'Bench',
          email: 'bench@ostrel.example',
          password: randomBytes(20).toString('base64url'),
          assignments: [
            { role: 'administrator', categoryId: null },
            { role: 'category-lead', categoryId: null },
          ],
          isDataSteward: true,
        }),
      );
      return await work({ name, cluster, database, actor });
    } finally {
      await database.close();
    }
  } finally {
    await withClient(databaseUrl(cluster, 'owner', 'postgres'), (client) =>
      client.query(`DROP DATABASE IF EXISTS ${name} WITH (FORCE)`),
    );
    await cluster.stop();
  }
}

/**
 * Stores an invented category with its range, its accepted sales and its coming promotions. It writes the tables that an accepted import leaves, a line at a
 * time; how fast imports are is another row's question. Returns the category's id.
 */
export async function storeCategory(
  { database, actor, cluster, name }: BenchDatabase,
  category: DemoCategory,
): Promise<number> {
  const { pool } = database;
  const { id: categoryId } = await createCategory(database, actor, category.name);
  await pool.query('select ensure_sales_months($1, $2)', [firstWeek, seam]);
  await pool.query(`update setting set value = '1' where name = 'firstWeekday'`);
  await pool.query(`update setting set value = '"DE"' where name = 'holidayCountry'`);
  await pool.query('insert into location (code, name) values ($1, $1) on conflict do nothing', [locationCode]);
  const location = await pool.query<{ id: number }>('select id from location where code = $1', [locationCode]);
  const locationId = location.rows[0]!.id;
  const made = await pool.query<{ importId: number; revisionId: number; calendarId: number }>(
    `with stored as (insert into stored_file (file_name, size_bytes, sha256) values ('bench.csv', 0, $2) returning id),
       made as (insert into "import" (file_id, sha256, state, actor_id, accepted_at, accepted_by) select id, $2, 'accepted', $1, now(), $1 from stored returning id),
       touched as (insert into import_category (import_id, category_id) select id, $3 from made),
       revision as (insert into sales_revision (import_id, change, actor_id) select id, 'accept', $1 from made returning id),
       calendar as (insert into calendar_revision (change, actor_id) values ('edit', $1) returning id)
     select made.id as "importId", revision.id as "revisionId", calendar.id as "calendarId" from made, revision, calendar`,
    [actor.id, category.slug, categoryId],
  );
  const { importId, revisionId, calendarId } = made.rows[0]!;
  for (const { line, sales, calendar } of tellLines(category)) {
    const stored = await pool.query<{ id: number; code: string }>(
      `with line as (insert into product_line (category_id, name) values ($1, $2) returning id),
         made as (insert into item (code, name) select * from unnest($3::text[], $4::text[]) returning id, code),
         member as (insert into item_membership (item_id, line_id, valid_from) select made.id, line.id, date '1900-01-01' from made, line)
       select id, code from made`,
      [categoryId, line.name, line.items.map(({ code }) => code), line.items.map(({ name }) => name)],
    );
    const idOf = new Map(stored.rows.map(({ id, code }) => [code, id]));
    const rows = [
      sales.map(({ item }) => idOf.get(item)),
      sales.map(({ weekStart }) => weekStart),
      sales.map(({ units }) => units),
      sales.map(({ netValue }) => netValue),
      sales.map(({ price }) => price),
      sales.map(({ regularPrice }) => regularPrice),
      sales.map(({ feature }) => feature),
      sales.map(({ display }) => display),
      sales.map(({ multibuy }) => (multibuy > 0 ? JSON.stringify({ multibuy }) : null)),
      sales.map(({ gap }) => gap),
    ];
    for (const table of ['sales_entry', 'sales_week']) {
      await pool.query(
        `insert into ${table} (import_id, revision_id, location_id, item_id, week_start, units, net_value, price, regular_price, feature, display, mechanics, gap)
         select $1, $2, $3, * from unnest($4::int[], $5::date[], $6::float8[], $7::float8[], $8::float8[], $9::float8[], $10::real[], $11::real[], $12::jsonb[], $13::real[])`,
        [importId, revisionId, locationId, ...rows],
      );
    }
    const promoted = calendar.filter(({ promotion }) => promotion !== '');
    await pool.query(
      `insert into promotion_entry (revision_id, promotion, name, item_ids, location_ids, first_week, last_week, depth, feature, display, mechanics)
       select $1, gen_random_uuid()::text, name, array[item_id], array[$2::int], week, week, depth, feature, display, mechanics
       from unnest($3::int[], $4::date[], $5::text[], $6::float8[], $7::real[], $8::real[], $9::jsonb[]) as p(item_id, week, name, depth, feature, display, mechanics)`,
      [
        calendarId,
        locationId,
        promoted.map(({ item }) => idOf.get(item)),
        promoted.map(({ weekStart }) => weekStart),
        promoted.map(({ promotion }) => promotion),
        promoted.map(({ depth }) => depth),
        promoted.map(({ feature }) => feature),
        promoted.map(({ display }) => display),
        promoted.map(({ multibuy }) => JSON.stringify(multibuy > 0 ? { multibuy } : {})),
      ],
    );
  }
  // What autovacuum does a minute after an import.
  await withClient(databaseUrl(cluster, 'owner', name), (client) => client.query('analyze'));
  return categoryId;
}

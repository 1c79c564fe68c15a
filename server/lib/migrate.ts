import { runMigrations as migrateJobQueue } from 'graphile-worker';
import pg from 'pg';
import { Umzug, type UmzugStorage } from 'umzug';
import { migrations } from '../migrations/all-migrations.ts';

/** One numbered, forward-only change of the schema. */
export interface Migration {
  name: string;
  sql: string;
}

/** Any constant number will do: whoever migrates takes this advisory lock, so that two starts at once don't collide. */
const migrationLock = 4_310_2026;

/**
 * Brings the database to the newest schema, the job queue's included, under an advisory lock; each migration is one transaction.
 * url: a role that owns the database. Returns the names of what was applied, in order.
 */
export async function migrate(url: string): Promise<string[]> {
  const client = new pg.Client({ connectionString: url });
  await client.connect();
  try {
    await client.query('select pg_advisory_lock($1)', [migrationLock]);
    await client.query(
      'create table if not exists applied_migration (name text primary key, at timestamptz not null default now())',
    );
    const umzug = new Umzug({
      migrations: migrations.map((migration) => ({
        name: migration.name,
        up: () => applyInTransaction(client, migration),
      })),
      storage: appliedMigrations(client),
      logger: undefined,
    });
    const applied = await umzug.up();
    await migrateJobQueue({ connectionString: url });
    await grantJobQueue(client);
    return applied.map(({ name }) => name);
  } finally {
    await client.end();
  }
}

async function applyInTransaction(client: pg.Client, migration: Migration): Promise<void> {
  await client.query('begin');
  try {
    await client.query(migration.sql);
    await client.query('insert into applied_migration (name) values ($1)', [migration.name]);
    await client.query('commit');
  } catch (error) {
    await client.query('rollback');
    throw new Error(`migration ${migration.name} failed`, { cause: error });
  }
}

function appliedMigrations(client: pg.Client): UmzugStorage {
  return {
    executed: async () => {
      const { rows } = await client.query<{ name: string }>('select name from applied_migration order by name');
      return rows.map(({ name }) => name);
    },
    // Written with the migration itself, in its transaction.
    logMigration: () => Promise.resolve(),
    unlogMigration: () => Promise.reject(new Error('migrations go forward only')),
  };
}

/** The queue's tables have row security on; the application works on them through a policy of its own. */
async function grantJobQueue(client: pg.Client): Promise<void> {
  await client.query(`
    do $queue$
    declare t record;
    begin
      if not exists (select from pg_roles where rolname = 'fairweek_application') then return; end if;
      grant usage on schema graphile_worker to fairweek_application;
      grant select, insert, update, delete on all tables in schema graphile_worker to fairweek_application;
      grant usage, select on all sequences in schema graphile_worker to fairweek_application;
      grant execute on all functions in schema graphile_worker to fairweek_application;
      for t in select c.relname from pg_class c join pg_namespace n on n.oid = c.relnamespace
               where n.nspname = 'graphile_worker' and c.relkind = 'r' and c.relrowsecurity loop
        if not exists (select from pg_policies where schemaname = 'graphile_worker' and tablename = t.relname and policyname = 'application') then
          execute format('create policy application on graphile_worker.%I to fairweek_application using (true) with check (true)', t.relname);
        end if;
      end loop;
    end $queue$`);
}

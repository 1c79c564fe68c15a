import pg from 'pg';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { migrate } from '../../../server/lib/migrate.ts';
import { appendOnlyTables } from '../../../server/migrations/0004-append-only-and-grants.ts';
import { createTestDatabase, type TestDatabase } from '../../setup/database.ts';

let testDatabase: TestDatabase;
let migrator: pg.Client;
let application: pg.Client;
let reader: pg.Client;

beforeAll(async () => {
  testDatabase = await createTestDatabase();
  migrator = new pg.Client({ connectionString: testDatabase.migratorUrl });
  application = new pg.Client({ connectionString: testDatabase.applicationUrl });
  reader = new pg.Client({ connectionString: testDatabase.readerUrl });
  await Promise.all([migrator.connect(), application.connect(), reader.connect()]);
});

afterAll(async () => {
  await Promise.all([migrator.end(), application.end(), reader.end()]);
  await testDatabase.drop();
});

describe('append-only tables', () => {
  it('may be read and added to by the application, and nothing else', async () => {
    const { rows } = await application.query<{ name: string; may: string[] }>(
      `select t.name, array(select p from unnest(array['select','insert','update','delete','truncate']) p where has_table_privilege(t.name, p)) as may
       from unnest($1::text[]) as t(name)`,
      [appendOnlyTables],
    );
    expect(rows).toHaveLength(appendOnlyTables.length);
    for (const { may } of rows) expect(may).toEqual(['select', 'insert']);
  });

  it.each(appendOnlyTables)('%s refuses to be emptied, even by the owner of the tables', async (table) => {
    await expect(migrator.query(`truncate ${table} cascade`)).rejects.toThrow('never changed or removed');
  });

  it('refuse UPDATE and DELETE of a row by trigger, even by the owner of the tables', async () => {
    const { rows } = await migrator.query<{ id: number }>(
      `insert into audit_entry (action, subject) values ('try', 'test') returning id`,
    );
    await expect(
      migrator.query('update audit_entry set action = $1 where id = $2', ['other', rows[0]?.id]),
    ).rejects.toThrow('never changed or removed');
    await expect(migrator.query('delete from audit_entry where id = $1', [rows[0]?.id])).rejects.toThrow(
      'never changed or removed',
    );
    const { rows: triggers } = await migrator.query<{ name: string }>(
      `select c.relname as name from pg_trigger t join pg_class c on c.oid = t.tgrelid
       where t.tgname = c.relname || '_append_only' and t.tgenabled = 'O' and (t.tgtype & 24) = 24 and (t.tgtype & 1) = 1`,
    );
    expect(triggers.map(({ name }) => name).sort()).toEqual([...appendOnlyTables].sort());
  });

  it('hold in the monthly parts of the sales entries too', async () => {
    await application.query(`select ensure_sales_months('2026-01-05', '2026-03-30')`);
    const { rows } = await application.query<{ name: string; update: boolean; remove: boolean }>(
      `select relname as name, has_table_privilege(oid, 'update') as update, has_table_privilege(oid, 'delete') as remove
       from pg_class where relname like 'sales_entry_2026%' and relkind = 'r' order by 1`,
    );
    expect(rows.map(({ name }) => name)).toEqual(['sales_entry_202601', 'sales_entry_202602', 'sales_entry_202603']);
    expect(rows.some(({ update, remove }) => update || remove)).toBe(false);
  });
});

describe('the roles', () => {
  it('keep the application from changing the schema', async () => {
    await expect(application.query('create table mine (id int)')).rejects.toThrow('permission denied');
    await expect(application.query('drop table person')).rejects.toThrow('must be owner');
    await expect(application.query(`insert into applied_migration (name) values ('x')`)).rejects.toThrow(
      'permission denied',
    );
  });

  it('let the reader read plans but no secret', async () => {
    await expect(reader.query('select count(*) from plan_version')).resolves.toBeDefined();
    await expect(reader.query('select id, name from person')).resolves.toBeDefined();
    await expect(reader.query('select password_hash from person')).rejects.toThrow('permission denied');
    await expect(reader.query('select * from session')).rejects.toThrow('permission denied');
    await expect(reader.query(`insert into reason (name) values ('x')`)).rejects.toThrow('permission denied');
  });
});

describe('migrating', () => {
  it('is safe to repeat, and to start twice at once', async () => {
    expect(await Promise.all([migrate(testDatabase.migratorUrl), migrate(testDatabase.migratorUrl)])).toEqual([[], []]);
  });
});

import pg from 'pg';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { openTestDeps, type TestDeps } from '../../factories/deps.ts';
import { makePerson } from '../../factories/people.ts';
import { makeRange } from '../../factories/range.ts';
import { makeSales } from '../../factories/sales.ts';

let deps: TestDeps;

beforeAll(async () => {
  deps = await openTestDeps();
  const range = await makeRange(deps.database);
  const planner = await makePerson(deps.database);
  await makeSales(deps.database, { actorId: planner.id, weeks: 6, ...range });
});
afterAll(() => deps.close());

async function withClient<T>(url: string, work: (client: pg.Client) => Promise<T>): Promise<T> {
  const client = new pg.Client({ connectionString: url });
  await client.connect();
  try {
    return await work(client);
  } finally {
    await client.end();
  }
}

const changes = [
  'update sales_entry set units = 0',
  'delete from sales_entry',
  'truncate sales_entry',
  `update sales_revision set change = 'withdraw'`,
  'delete from sales_revision',
  'delete from stored_file',
  'truncate promotion_entry, price_entry',
];

describe('what was imported', () => {
  it.each(changes)('can’t be changed by the application: %s', async (sql) => {
    await expect(deps.database.pool.query(sql)).rejects.toMatchObject({ code: '42501' });
  });

  it.each(changes)('can’t be changed by the owner of the tables either, by trigger: %s', async (sql) => {
    const attempt = withClient(deps.testDatabase.migratorUrl, (client) => client.query(sql));
    await expect(attempt).rejects.toThrow(/never changed or removed|foreign key/);
  });

  it('nor in the month it is stored in', async () => {
    await expect(deps.database.pool.query('delete from sales_entry_202501')).rejects.toMatchObject({ code: '42501' });
    const attempt = withClient(deps.testDatabase.migratorUrl, (client) =>
      client.query('update sales_entry_202501 set units = 0'),
    );
    await expect(attempt).rejects.toThrow(/never changed or removed/);
  });

  it('stays whole after all of that', async () => {
    const { rows } = await deps.database.pool.query<{ rows: number; units: number }>(
      'select count(*)::int as rows, sum(units) as units from sales_entry',
    );
    expect(rows[0]?.rows).toBe(12);
    expect(rows[0]?.units).toBeGreaterThan(200);
  });
});

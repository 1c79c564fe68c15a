import fc from 'fast-check';
import request from 'supertest';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { Problem } from '../../../shared/contracts/problem.ts';
import { addWeeks } from '../../../shared/domain/weeks.ts';
import { buildApp } from '../../../server/app.ts';
import { openTestDeps, signIn, type TestDeps } from '../../factories/deps.ts';
import { buildImporter } from '../../factories/imports.ts';
import { makePerson } from '../../factories/people.ts';
import { makeRange, type MadeRange } from '../../factories/range.ts';

let deps: TestDeps;
let range: MadeRange;
let cookie: string;
let importer: ReturnType<typeof buildImporter>;

beforeAll(async () => {
  deps = await openTestDeps();
  range = await makeRange(deps.database, { items: 2, locations: 2 });
  const lead = await makePerson(deps.database, {
    assignments: [{ role: 'category-lead', categoryId: range.categoryId }],
  });
  cookie = await signIn(deps, lead);
  importer = buildImporter(buildApp(deps), deps, cookie);
});
afterAll(() => deps.close());

const firstWeek = '2025-12-15';

/** Rows by key; a value of its own for each import, so that no two can be mistaken. */
type Cells = Record<string, number>;

async function importCells(cells: Cells): Promise<number> {
  const lines = Object.entries(cells).map(([key, units]) => {
    const [item, location, week] = key.split('|').map(Number);
    return `${addWeeks(firstWeek, week ?? 0)},${range.itemCodes[item ?? 0]},${range.locationCodes[location ?? 0]},${units},0.5,1`;
  });
  const read = await importer.upload('part.csv', `week,item,location,units,gap,promo_coupon\n${lines.join('\n')}\n`);
  expect(read).toMatchObject({ rowsTaken: lines.length, rowsRefused: 0 });
  expect((await importer.accept(read.id)).state).toBe('done');
  return read.id;
}

async function readWhole(): Promise<string[]> {
  const { rows } = await deps.database.pool.query<{ row: string }>(
    'select w::text as row from sales_week w order by item_id, location_id, week_start',
  );
  return rows.map(({ row }) => row);
}

async function readCells(): Promise<Cells> {
  const { rows } = await deps.database.pool.query<{ item: number; location: number; week: number; units: number }>(
    `select item_id as item, location_id as location, (week_start - $1::date) / 7 as week, units from sales_week`,
    [firstWeek],
  );
  return Object.fromEntries(
    rows.map(({ item, location, week, units }) => [
      `${range.itemIds.indexOf(item)}|${range.locationIds.indexOf(location)}|${week}`,
      units,
    ]),
  );
}

describe('withdrawing', () => {
  it('the newest import brings back exactly what was there before', async () => {
    const before = await readWhole();
    const first = await importCells({ '0|0|0': 1, '0|0|1': 2, '1|1|3': 3 });
    const between = await readWhole();
    const second = await importCells({ '0|0|1': 20, '1|1|3': 30, '1|0|2': 40 });
    expect(await readWhole()).not.toEqual(between);
    expect((await importer.withdraw(second)).state).toBe('done');
    expect(await readWhole()).toEqual(between);
    expect(await importer.read(second)).toMatchObject({ state: 'withdrawn', mayWithdraw: false });
    await importer.withdraw(first);
    expect(await readWhole()).toEqual(before);

    const { rows } = await deps.database.pool.query(
      `select import_id, change from sales_revision where import_id = any($1) order by id`,
      [[first, second]],
    );
    expect(rows).toEqual([
      { import_id: first, change: 'accept' },
      { import_id: second, change: 'accept' },
      { import_id: second, change: 'withdraw' },
      { import_id: first, change: 'withdraw' },
    ]);
    const entries = await deps.database.pool.query(
      'select count(*)::int as count from sales_entry where import_id = $1',
      [second],
    );
    expect(entries.rows).toEqual([{ count: 3 }]);
    const audited = await deps.database.pool.query(
      `select why, category_id from audit_entry where action = 'import.withdraw' and subject = $1`,
      [`import:${second}`],
    );
    expect(audited.rows).toEqual([{ why: 'sent by mistake', category_id: range.categoryId }]);
  });

  it('any of several overlapping imports, in any order, leaves the newest accepted value of each key', async () => {
    const key = fc
      .tuple(fc.nat({ max: 1 }), fc.nat({ max: 1 }), fc.nat({ max: 5 }))
      .map(([item, location, week]) => `${item}|${location}|${week}`);
    const files = fc.array(fc.uniqueArray(key, { minLength: 1, maxLength: 12 }), { minLength: 3, maxLength: 5 });
    await fc.assert(
      fc.asyncProperty(files, fc.infiniteStream(fc.nat()), async (keysOfFiles, draws) => {
        const standing: { id: number; cells: Cells }[] = [];
        let value = 0;
        for (const keys of keysOfFiles) {
          const cells = Object.fromEntries(keys.map((name) => [name, (value += 1)]));
          standing.push({ id: await importCells(cells), cells });
          expect(await readCells()).toEqual(Object.assign({}, ...standing.map((one) => one.cells)));
        }
        while (standing.length > 0) {
          const [gone] = standing.splice((draws.next().value as number) % standing.length, 1);
          expect((await importer.withdraw(gone?.id ?? 0)).state).toBe('done');
          expect(await readCells()).toEqual(Object.assign({}, ...standing.map((one) => one.cells)));
        }
      }),
      { numRuns: 6, seed: 20261201 },
    );
  }, 120_000);

  it('needs a reason, an accepted import, and a right in each of its categories', async () => {
    const id = await importCells({ '0|0|0': 5 });
    const send = (as: string, body: object) =>
      request(buildApp(deps)).post(`/api/imports/${id}/withdraw`).set('cookie', as).send(body);
    const typeOf = (response: request.Response) => Problem.parse(JSON.parse(response.text)).type;
    expect(typeOf(await send(cookie, { reason: ' ' }))).toBe('/problems/invalid-request');
    const viewer = await makePerson(deps.database, {
      assignments: [{ role: 'viewer', categoryId: range.categoryId }],
    });
    expect(typeOf(await send(await signIn(deps, viewer), { reason: 'wrong' }))).toBe('/problems/not-allowed');
    const stranger = await makePerson(deps.database, { assignments: [] });
    expect(typeOf(await send(await signIn(deps, stranger), { reason: 'wrong' }))).toBe('/problems/not-found');
    expect((await importer.withdraw(id)).state).toBe('done');
    expect(typeOf(await send(cookie, { reason: 'again' }))).toBe('/problems/wrong-state');
  });
});

import request from 'supertest';
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { CalendarView } from '../../../shared/contracts/calendar.ts';
import { Problem } from '../../../shared/contracts/problem.ts';
import { holidaysBetween, loadPlannedWeeks } from '../../../server/features/calendar/calendar.service.ts';
import { inTransaction } from '../../../server/lib/database.ts';
import { buildApp } from '../../../server/app.ts';
import { openTestDeps, signIn, type TestDeps } from '../../factories/deps.ts';
import { buildImporter } from '../../factories/imports.ts';
import { makePerson } from '../../factories/people.ts';
import { makeRange, type MadeRange } from '../../factories/range.ts';
import { makeSales } from '../../factories/sales.ts';

let deps: TestDeps;
let range: MadeRange;
let cookie: string;
let importer: ReturnType<typeof buildImporter>;
let app: ReturnType<typeof buildApp>;

/** Sales of ten weeks up to 2026-03-09; the plan begins a week later. */
const firstPlanned = '2026-03-16';

beforeAll(async () => {
  deps = await openTestDeps();
  app = buildApp(deps);
});
beforeEach(async () => {
  range = await makeRange(deps.database, { items: 2, locations: 2 });
  const planner = await makePerson(deps.database, {
    assignments: [{ role: 'planner', categoryId: range.categoryId }],
  });
  await makeSales(deps.database, { actorId: planner.id, firstWeek: '2026-01-05', weeks: 10, ...range });
  cookie = await signIn(deps, planner);
  importer = buildImporter(app, deps, cookie);
});
afterAll(() => deps.close());

async function send(rows: string[]): Promise<number> {
  const header = 'week,item,location,regular_price,depth,feature,display,promo_coupon,promotion';
  const read = await importer.upload('calendar.csv', `${header}\n${rows.join('\n')}\n`);
  expect(read).toMatchObject({ kind: 'calendar', state: 'to-check', rowsRefused: 0 });
  const job = await importer.accept(read.id);
  expect(job.problem).toBeNull();
  expect(job.state).toBe('done');
  return read.id;
}

async function readView(query: string): Promise<CalendarView> {
  const response = await request(app)
    .get(`/api/calendar?categoryId=${range.categoryId}&${query}`)
    .set('cookie', cookie);
  expect(response.status, response.text).toBe(200);
  return CalendarView.parse(response.body);
}

function loadPlan() {
  return inTransaction(deps.database, (tx) => loadPlannedWeeks(tx, range.itemIds, range.locationIds, firstPlanned, 4));
}

describe('a calendar file', () => {
  it('becomes promotions joined over weeks, locations and items, and prices where they change', async () => {
    const [a, b] = range.itemCodes;
    const [x, y] = range.locationCodes;
    await send([
      ...[a, b].flatMap((item) =>
        [x, y].flatMap((place) => [
          `2026-W12,${item},${place},2.00,0.25,1,0,0,Spring`,
          `2026-W13,${item},${place},2.00,0.25,1,0,0,Spring`,
          `2026-W14,${item},${place},2.20,,,,,`,
        ]),
      ),
      `2026-W15,${a},${x},2.20,0.1,0,1,0.5,`,
    ]);
    const view = await readView(`firstWeek=${firstPlanned}&weeks=4`);
    expect(view.promotions).toEqual([
      {
        name: 'Spring',
        firstWeek: '2026-03-16',
        lastWeek: '2026-03-23',
        itemIds: range.itemIds,
        locationIds: range.locationIds,
        depth: 0.25,
        feature: 1,
        display: 0,
        mechanics: {},
      },
      {
        name: '10 % off, display, coupon',
        firstWeek: '2026-04-06',
        lastWeek: '2026-04-06',
        itemIds: [range.itemIds[0]],
        locationIds: [range.locationIds[0]],
        depth: 0.1,
        feature: 0,
        display: 1,
        mechanics: { coupon: 0.5 },
      },
    ]);
    expect(view.prices).toHaveLength(8);
    expect(view.prices.slice(0, 2)).toEqual([
      { itemId: range.itemIds[0], locationId: range.locationIds[0], weekStart: '2026-03-16', regularPrice: 2 },
      { itemId: range.itemIds[0], locationId: range.locationIds[0], weekStart: '2026-03-30', regularPrice: 2.2 },
    ]);
    expect(view.lines.map(({ items }) => items.map(({ id }) => id))).toEqual([range.itemIds]);
    expect(view.revision).toBeGreaterThan(0);
  });

  it('is what a forecast gets to know about the coming weeks', async () => {
    const [a] = range.itemCodes;
    const [x] = range.locationCodes;
    await send([
      `2026-W12,${a},${x},2.00,0.25,1,0,0,Spring`,
      `2026-W13,${a},${x},2.50,,,,,`,
      `2026-W15,${a},${x},2.50,,0,0,1,`,
    ]);
    const plan = await loadPlan();
    expect(plan).toHaveLength(1);
    expect(plan[0]).toMatchObject({ itemId: range.itemIds[0], locationId: range.locationIds[0] });
    const { NaN: unknown } = Number;
    const plain = { price: unknown, depth: unknown, feature: 0, display: 0, mechanics: {} };
    expect(plan[0]?.planned).toEqual([
      { ...plain, weekStart: '2026-03-16', regularPrice: 2, depth: 0.25, feature: 1 },
      { ...plain, weekStart: '2026-03-23', regularPrice: 2.5 },
      { ...plain, weekStart: '2026-03-30', regularPrice: 2.5 },
      { ...plain, weekStart: '2026-04-06', regularPrice: 2.5, mechanics: { coupon: 1 } },
    ]);
  });

  it('without locations holds at every one of them', async () => {
    const read = await importer.upload(
      'everywhere.csv',
      `week,item,depth,promotion\n2026-W12,${range.itemCodes[1]},30%,Easter\n`,
    );
    await importer.accept(read.id);
    const view = await readView(`firstWeek=${firstPlanned}&weeks=4`);
    expect(view.promotions).toMatchObject([
      { name: 'Easter', depth: 0.3, itemIds: [range.itemIds[1]], locationIds: range.locationIds },
    ]);
  });

  it('that states a week without a promotion takes away the one in force, and withdrawn gives it back', async () => {
    const [a] = range.itemCodes;
    const [x] = range.locationCodes;
    await send([`2026-W12,${a},${x},2,0.25,1,0,0,Spring`, `2026-W13,${a},${x},2,0.25,1,0,0,Spring`]);
    const before = await readView(`firstWeek=${firstPlanned}&weeks=4`);
    const second = await send([`2026-W13,${a},${x},2,0,0,0,0,`, `2026-W14,${a},${x},2,0,0,0,0,`]);
    const between = await readView(`firstWeek=${firstPlanned}&weeks=4`);
    expect(between.promotions).toMatchObject([{ name: 'Spring', firstWeek: '2026-03-16', lastWeek: '2026-03-16' }]);
    const { rows } = await deps.database.pool.query(
      `select first_week, last_week, is_none from promotion_entry where import_id = $1`,
      [second],
    );
    expect(rows).toEqual([{ first_week: '2026-03-23', last_week: '2026-03-23', is_none: true }]);

    expect((await importer.withdraw(second)).state).toBe('done');
    const after = await readView(`firstWeek=${firstPlanned}&weeks=4`);
    expect(after.promotions).toEqual(before.promotions);
    expect(after.revision).toBeGreaterThan(between.revision ?? Infinity);
  });

  it('can’t make items, and says so row by row', async () => {
    const read = await importer.upload(
      'unknown.csv',
      `week,item,depth\n2026-W12,NOBODY,0.2\n2026-W12,${range.itemCodes[0]},0.2\n`,
    );
    expect(read).toMatchObject({ rowsTaken: 1, rowsRefused: 1 });
    expect(read.findings).toMatchObject([{ kind: 'unknown-item', cell: 'B2', verdict: 'refused' }]);
  });

  it('has its regular prices overtaken by what was sold since', async () => {
    const [a] = range.itemCodes;
    const [x] = range.locationCodes;
    await send([`2026-W05,${a},${x},9.99,,,,,`]);
    expect(await loadPlan()).toEqual([]);
  });
});

describe('the calendar', () => {
  it('is no business of strangers', async () => {
    const stranger = await makePerson(deps.database, { assignments: [] });
    const response = await request(app)
      .get(`/api/calendar?categoryId=${range.categoryId}`)
      .set('cookie', await signIn(deps, stranger));
    expect(Problem.parse(JSON.parse(response.text))).toMatchObject({ type: '/problems/not-found', status: 404 });
  });

  it('starts shortly before the plan when no week is asked for', async () => {
    const view = await readView('weeks=8');
    expect(view).toMatchObject({ firstWeek: '2026-02-16', weeks: 8, promotions: [] });
  });

  it('puts public holidays of the chosen country on their trading weeks', async () => {
    await deps.database.pool.query(`update setting set value = '"DE"' where name = 'holidayCountry'`);
    const view = await readView('firstWeek=2026-03-30&weeks=2');
    // Good Friday and Easter Monday 2026: Easter Sunday is 5 April 2026 (Meeus, Astronomical Algorithms, ch. 8).
    expect(view.holidays).toMatchObject([
      { name: 'Good Friday', date: '2026-04-03', weekStart: '2026-03-30' },
      { name: 'Easter Monday', date: '2026-04-06', weekStart: '2026-04-06' },
    ]);
    const found = await inTransaction(deps.database, (tx) => holidaysBetween(tx, '2026-12-20', '2027-01-02'));
    expect(found).toMatchObject([
      { date: '2026-12-25', weekStart: '2026-12-21', dayInWeek: 4 },
      { date: '2026-12-26', weekStart: '2026-12-21', dayInWeek: 5 },
      { date: '2027-01-01', weekStart: '2026-12-28', dayInWeek: 4 },
    ]);
    await deps.database.pool.query(`update setting set value = '""' where name = 'holidayCountry'`);
    expect((await readView('firstWeek=2026-03-30&weeks=2')).holidays).toEqual([]);
  });
});

import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import {
  categorySalesByWeek,
  currentSalesRevision,
  lastSalesWeek,
  loadLineHistory,
  salesTotalsByWeek,
} from '../../../server/features/sales/sales.service.ts';
import { inTransaction, type Tx } from '../../../server/lib/database.ts';
import { openTestDeps, type TestDeps } from '../../factories/deps.ts';
import { makePerson } from '../../factories/people.ts';
import { makeLine, makeRange, type MadeRange } from '../../factories/range.ts';
import { makeSales } from '../../factories/sales.ts';

let deps: TestDeps;
let range: MadeRange;
let revisionId: number;

beforeAll(async () => {
  deps = await openTestDeps();
  range = await makeRange(deps.database, { items: 2, locations: 2 });
  const planner = await makePerson(deps.database);
  const made = await makeSales(deps.database, {
    actorId: planner.id,
    ...range,
    firstWeek: '2025-12-01',
    weeks: 8,
    factsOf: (series, week) => {
      // The last series lacks its third week; the first has a gap in its second and a promotion in its fourth.
      if (series === 3 && week === 2) return null;
      if (series === 0 && week === 1) return { units: 3, gap: 0.5 };
      if (series === 0 && week === 3) return { units: 30, price: 1.5, regularPrice: 2, mechanics: { coupon: 1 } };
      return { units: 10 * (series + 1) + week, price: 2, regularPrice: 2 };
    },
  });
  revisionId = made.revisionId;
});
afterAll(() => deps.close());

function read<T>(work: (tx: Tx) => Promise<T>): Promise<T> {
  return inTransaction(deps.database, work);
}

describe('the history of a line', () => {
  it('has a series per item and location, with what isn’t known as NaN and missing weeks left out', async () => {
    const series = await read((tx) => loadLineHistory(tx, range.lineId));
    expect(series.map(({ itemId, locationId, sold }) => [itemId, locationId, sold.length])).toEqual([
      [range.itemIds[0], range.locationIds[0], 8],
      [range.itemIds[0], range.locationIds[1], 8],
      [range.itemIds[1], range.locationIds[0], 8],
      [range.itemIds[1], range.locationIds[1], 7],
    ]);
    expect(series[0]?.sold.slice(0, 4)).toEqual([
      {
        weekStart: '2025-12-01',
        units: 10,
        price: 2,
        regularPrice: 2,
        feature: NaN,
        display: NaN,
        mechanics: {},
        gap: 0,
        daysOpen: 7,
      },
      {
        weekStart: '2025-12-08',
        units: 3,
        price: NaN,
        regularPrice: NaN,
        feature: NaN,
        display: NaN,
        mechanics: {},
        gap: 0.5,
        daysOpen: 7,
      },
      {
        weekStart: '2025-12-15',
        units: 12,
        price: 2,
        regularPrice: 2,
        feature: NaN,
        display: NaN,
        mechanics: {},
        gap: 0,
        daysOpen: 7,
      },
      {
        weekStart: '2025-12-22',
        units: 30,
        price: 1.5,
        regularPrice: 2,
        feature: NaN,
        display: NaN,
        mechanics: { coupon: 1 },
        gap: 0,
        daysOpen: 7,
      },
    ]);
    expect(series[3]?.sold.map(({ weekStart }) => weekStart)).not.toContain('2025-12-15');
    expect(series[0]).toMatchObject({ unitStep: 1, listedFrom: null, listedTo: null });
  });

  it('ends with the week asked for', async () => {
    const series = await read((tx) => loadLineHistory(tx, range.lineId, { through: '2025-12-15' }));
    expect(series.map(({ sold }) => sold.at(-1)?.weekStart)).toEqual([
      '2025-12-15',
      '2025-12-15',
      '2025-12-15',
      '2025-12-08',
    ]);
  });

  it('follows an item that moves to another line from the day it moves', async () => {
    const moved = range.itemIds[1] ?? 0;
    const otherLine = await makeLine(deps.database, range.categoryId);
    await deps.database.pool.query(`update item_membership set valid_to = '2026-01-05' where item_id = $1`, [moved]);
    await deps.database.pool.query(
      `insert into item_membership (item_id, line_id, valid_from) values ($1, $2, '2026-01-05')`,
      [moved, otherLine],
    );
    const before = await read((tx) => loadLineHistory(tx, range.lineId));
    expect(new Set(before.map(({ itemId }) => itemId))).toEqual(new Set([range.itemIds[0]]));
    const after = await read((tx) => loadLineHistory(tx, otherLine));
    expect(after.map(({ itemId, sold }) => [itemId, sold[0]?.weekStart])).toEqual([
      [moved, '2026-01-05'],
      [moved, '2026-01-05'],
    ]);
    const then = await read((tx) => loadLineHistory(tx, range.lineId, { through: '2025-12-22' }));
    expect(then).toHaveLength(4);
    await deps.database.pool.query(`delete from item_membership where item_id = $1 and valid_from = '2026-01-05'`, [
      moved,
    ]);
    await deps.database.pool.query(`update item_membership set valid_to = null where item_id = $1`, [moved]);
  });
});

describe('sales for the grid', () => {
  it('are arrays over the weeks asked for, with gaps and promotions by position', async () => {
    const rows = await read((tx) => salesTotalsByWeek(tx, [range.lineId], '2025-11-24', 6));
    expect(rows).toHaveLength(4);
    expect(rows[0]).toEqual({
      lineId: range.lineId,
      itemId: range.itemIds[0],
      locationId: range.locationIds[0],
      units: [null, 10, 3, 12, 30, 14],
      gapAt: [2],
      promotedAt: [4],
    });
    expect(rows[3]?.units).toEqual([null, 40, 41, null, 43, 44]);
    expect(await read((tx) => salesTotalsByWeek(tx, [], '2025-11-24', 6))).toEqual([]);
  });

  it('add up by week over the category, and tell the last week and the revision', async () => {
    const weeks = await read((tx) => categorySalesByWeek(tx, range.categoryId));
    expect(weeks).toHaveLength(8);
    expect(weeks[2]).toEqual({ weekStart: '2025-12-15', units: 12 + 22 + 32, isPromoted: false });
    expect(weeks[3]).toMatchObject({ isPromoted: true });
    expect(await read((tx) => lastSalesWeek(tx, range.categoryId))).toBe('2026-01-19');
    expect(await read((tx) => currentSalesRevision(tx))).toBe(revisionId);
  });
});

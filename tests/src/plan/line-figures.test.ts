import { describe, expect, it } from 'vitest';
import type { LinePlan, OverrideInForce, PlanSeries } from '../../../shared/contracts/plan.ts';
import { addWeeks } from '../../../shared/domain/weeks.ts';
import { buildRows } from '../../../src/features/plan/grid-rows.ts';
import { computeFigures, computeHistory, computeRow, findRange } from '../../../src/features/plan/line-figures.ts';
import { countCells, measureLargestChange } from '../../../src/features/plan/edit-size.ts';

const planFirstWeek = '2026-11-30';
const week = (index: number) => addWeeks(planFirstWeek, index);

function series(itemId: number, locationId: number, model: number[], extra: Partial<PlanSeries> = {}): PlanSeries {
  return {
    itemId,
    locationId,
    method: 'regression',
    units: [10, null],
    gapAt: [],
    promotedAt: [],
    model,
    base: model,
    plan: model,
    p2_5: model.map((units) => units * 0.5),
    p10: model.map((units) => units * 0.8),
    p50: model,
    p90: model.map((units) => units * 1.2),
    p97_5: model.map((units) => units * 1.5),
    lastYear: model.map(() => null),
    price: model.map(() => null),
    marks: {},
    ...extra,
  };
}

function override(change: Partial<OverrideInForce>): OverrideInForce {
  return {
    id: 1,
    sequence: 1,
    version: 2,
    scope: { itemId: 1, locationId: null },
    firstWeek: week(1),
    lastWeek: week(1),
    operation: 'set to',
    value: 90,
    reasonId: 1,
    note: null,
    author: 'A',
    at: '2026-12-01T08:00:00Z',
    reason: null,
    baseModel: [60],
    isDueAnotherLook: false,
    needsDecision: null,
    ...change,
  };
}

function plan(change: Partial<LinePlan> = {}): LinePlan {
  return {
    line: { id: 1, name: 'Line' },
    category: { id: 1, name: 'Category' },
    state: 'draft',
    version: null,
    run: null,
    historyFirstWeek: addWeeks(planFirstWeek, -2),
    planFirstWeek,
    planWeeks: 2,
    items: [
      { id: 1, code: 'a', name: 'Alpha', unitStep: 1 },
      { id: 2, code: 'b', name: 'Beta', unitStep: 1 },
    ],
    locations: [
      { id: 1, name: 'East' },
      { id: 2, name: 'West' },
    ],
    series: [series(1, 1, [20, 20]), series(1, 2, [40, 40], { gapAt: [0] }), series(2, 1, [10, 10])],
    totals: [],
    overrides: [],
    promotions: [],
    holidays: [],
    lockedWeeks: [],
    locks: [],
    round: null,
    handOver: null,
    findings: [],
    weekline: null,
    isBehindSales: false,
    activeJob: null,
    may: { override: true, submit: true, returnLine: false, lock: false, unlock: false, forecast: true },
    ...change,
  };
}

function rowsOf(of: LinePlan, pending: Parameters<typeof computeFigures>[1] = []) {
  const rows = buildRows(of, 'items', null);
  const figures = computeFigures(of, pending);
  return { figures, shown: rows.map((row) => computeRow(of, figures, row, computeHistory(of, row))) };
}

describe('rows of the grid', () => {
  it('sums locations into items and items into the total', () => {
    const { shown } = rowsOf(plan());
    expect(shown.map((row) => row.plan)).toEqual([
      [60, 60],
      [10, 10],
      [70, 70],
    ]);
    expect(shown[0]?.history).toEqual([20, null]);
  });

  it('counts gaps of an item’s series, and none for the total', () => {
    const { shown } = rowsOf(plan());
    expect(shown.map((row) => row.gaps)).toEqual([
      [1, 0],
      [0, 0],
      [0, 0],
    ]);
  });

  it('counts only the location in the filter, and stores changes for it', () => {
    const rows = buildRows(plan(), 'items', 2);
    expect(rows.map(({ key, scope, seriesIndexes }) => [key, scope, seriesIndexes])).toEqual([
      ['i1', { itemId: 1, locationId: 2 }, [1]],
      ['total', { itemId: null, locationId: 2 }, [1]],
    ]);
  });
});

describe('computeFigures', () => {
  const typed = {
    scope: { itemId: 1, locationId: null },
    firstWeek: week(1),
    lastWeek: week(1),
    operation: 'set to' as const,
    value: 90,
  };

  it('shows a pending edit in its row, its parts and the total, and marks it as not saved', () => {
    const { shown, figures } = rowsOf(plan(), [typed]);
    expect(shown[0]?.plan).toEqual([60, 90]);
    expect(shown[2]?.plan).toEqual([70, 100]);
    expect(figures.plan).toEqual([
      [20, 30],
      [40, 60],
      [10, 10],
    ]);
    expect(shown[0]?.marks[1]).toMatchObject({ overridden: 'own', isPending: true });
    expect(shown[0]?.marks[0]).toMatchObject({ overridden: null, isPending: false });
  });

  it('tells a row changed on itself from one moved by its total', () => {
    const onTotal = { ...typed, scope: { itemId: null, locationId: null }, value: 140 };
    const { shown } = rowsOf(plan(), [onTotal]);
    expect(shown.map((row) => row.marks[1]?.overridden)).toEqual(['through', 'through', 'own']);
  });

  it('carries the marks of saved overrides', () => {
    const { shown } = rowsOf(plan({ overrides: [override({ isDueAnotherLook: true, needsDecision: 'why' })] }));
    expect(shown[0]?.marks[1]).toMatchObject({ isDueAnotherLook: true, needsDecision: true, overridden: 'own' });
  });

  it('shows nothing overridden any more once a clear is pending', () => {
    const saved = plan({ overrides: [override({})] });
    const { shown } = rowsOf(saved, [{ ...typed, operation: 'clear', value: null }]);
    expect(shown[0]?.plan).toEqual([60, 60]);
    expect(shown[0]?.marks[1]).toMatchObject({ overridden: null, isPending: true });
  });

  it('keeps locked weeks and says which edit can’t be met there', () => {
    const locked = plan({ lockedWeeks: [week(1)] });
    const { shown, figures } = rowsOf(locked, [typed]);
    expect(shown[0]?.plan).toEqual([60, 60]);
    expect(figures.unmet).toEqual([{ edit: typed, weekStart: week(1), reason: 'locked' }]);
  });

  it('marks a number outside the 95 % range where the run holds one for the row', () => {
    const totals = [
      {
        scope: { itemId: 1, locationId: null },
        p2_5: [50, 50],
        p10: [55, 55],
        p50: [60, 60],
        p90: [65, 65],
        p97_5: [70, 70],
      },
    ];
    const { shown } = rowsOf(plan({ totals }), [typed]);
    expect(shown[0]?.marks.map(({ isOutsideRange }) => isOutsideRange)).toEqual([false, true]);
    expect(shown[2]?.marks.map(({ isOutsideRange }) => isOutsideRange)).toEqual([false, false]);
  });

  it('marks a number for which the model reaches beyond what was seen, but not the total', () => {
    const reaching = [
      series(1, 1, [20, 20], { marks: { 1: ['outside-seen-price', 'outside-listing'] } }),
      series(2, 1, [10, 10]),
    ];
    const { shown } = rowsOf(plan({ series: reaching }));
    expect(shown[0]?.marks.map(({ isBeyondSeen }) => isBeyondSeen)).toEqual([false, true]);
    expect(shown[1]?.marks.map(({ isBeyondSeen }) => isBeyondSeen)).toEqual([false, false]);
    expect(shown[2]?.marks.map(({ isBeyondSeen }) => isBeyondSeen)).toEqual([false, false]);
  });

  it('takes an item of one location and its only series for the same', () => {
    const one = plan({ locations: [{ id: 1, name: 'All' }], series: [series(1, 1, [20, 20]), series(2, 1, [10, 10])] });
    const { shown } = rowsOf(one, [{ ...typed, scope: { itemId: 1, locationId: 1 } }]);
    expect(shown[0]?.marks[1]?.overridden).toBe('own');
    const [row] = buildRows(one, 'items', null);
    expect(row && findRange(one, row)?.p50).toEqual([20, 20]);
  });
});

describe('size of edits', () => {
  const halved = {
    scope: { itemId: 1, locationId: null },
    firstWeek: week(0),
    lastWeek: week(1),
    operation: 'scale by' as const,
    value: 0.5,
  };

  it('counts cells', () => {
    expect(countCells([halved])).toBe(2);
  });

  it('measures the largest change of an edited row as a share of what was saved', () => {
    const of = plan();
    expect(measureLargestChange(of, computeFigures(of, [halved]).plan, [halved])).toBeCloseTo(0.5, 12);
  });

  it('takes something from nothing for the largest change there is', () => {
    const of = plan({ series: [series(1, 1, [0, 0]), series(2, 1, [10, 10])] });
    const typed = { ...halved, operation: 'set to' as const, value: 4 };
    expect(measureLargestChange(of, computeFigures(of, [typed]).plan, [typed])).toBe(Infinity);
  });
});

import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import {
  overridesByWeek,
  replayOverrides,
  scopeHolds,
  scopesMeet,
  type Replay,
  type ReplayedOverride,
  type ReplayedSeries,
  type Scope,
} from '../../../shared/domain/override-arithmetic.ts';
import { addWeeks, weeksBetween } from '../../../shared/domain/weeks.ts';

const firstWeek = '2026-11-26';
const weekAt = (index: number): string => addWeeks(firstWeek, index);
const lineScope: Scope = { itemId: null, locationId: null };
const item = (itemId: number): Scope => ({ itemId, locationId: null });
const location = (locationId: number): Scope => ({ itemId: null, locationId });
const cell = (itemId: number, locationId: number): Scope => ({ itemId, locationId });

type Change = [
  scope: Scope,
  operation: ReplayedOverride['operation'],
  value: number | null,
  from?: number,
  to?: number,
];

function changes(...list: Change[]): ReplayedOverride[] {
  return list.map(([scope, operation, value, from = 0, to = from], index) => ({
    id: index + 1,
    sequence: index + 1,
    scope,
    firstWeek: weekAt(from),
    lastWeek: weekAt(to),
    operation,
    value,
  }));
}

function grid(models: number[][], { locations = 1, unitStep = 1 } = {}): ReplayedSeries[] {
  return models.map((model, index) => ({
    itemId: 1 + Math.floor(index / locations),
    locationId: 1 + (index % locations),
    unitStep,
    model,
  }));
}

function replay(
  series: ReplayedSeries[],
  overrides: ReplayedOverride[],
  locked: number[] = [],
  lockedPlan?: number[][],
): Replay {
  return replayOverrides({
    series,
    planFirstWeek: firstWeek,
    planWeeks: series[0]?.model.length ?? 0,
    lockedWeeks: locked.map(weekAt),
    lockedPlan: lockedPlan ?? (locked.length > 0 ? series.map(({ model }) => [...model]) : null),
    overrides,
  });
}

const column = ({ plan }: Replay, week = 0): number[] => plan.map((row) => row[week]!);
const sum = (values: Iterable<number>): number => [...values].reduce((total, value) => total + value, 0);

describe('one change', () => {
  test('a total spreads in proportion to the plan, exactly, by largest remainders', () => {
    const { plan, unmet } = replay(grid([[50], [30], [21]]), changes([lineScope, 'set to', 150]));
    expect(plan).toEqual([[74], [45], [31]]);
    expect(unmet).toEqual([]);
  });

  test('add and scale by change the total of the scope', () => {
    expect(column(replay(grid([[10], [30]]), changes([lineScope, 'add', 8])))).toEqual([12, 36]);
    expect(column(replay(grid([[10], [30]]), changes([lineScope, 'scale by', 0.5])))).toEqual([5, 15]);
    expect(column(replay(grid([[20]]), changes([cell(1, 1), 'scale by', 1.15])))).toEqual([23]);
  });

  test('a zero total spreads like the model, and evenly where the model is zero too', () => {
    expect(column(replay(grid([[10], [30]]), changes([lineScope, 'scale by', 0], [lineScope, 'set to', 8])))).toEqual([
      2, 6,
    ]);
    expect(column(replay(grid([[0], [0]]), changes([lineScope, 'set to', 6])))).toEqual([3, 3]);
  });

  test('each week of a range gets the value', () => {
    const { plan } = replay(grid([[10, 20, 30]]), changes([cell(1, 1), 'set to', 12, 1, 2]));
    expect(plan).toEqual([[10, 12, 12]]);
  });

  test('an item or location total touches its own series only', () => {
    const series = grid([[10], [20], [30], [40]], { locations: 2 });
    expect(column(replay(series, changes([item(1), 'set to', 60])))).toEqual([20, 40, 30, 40]);
    expect(column(replay(series, changes([location(2), 'set to', 30])))).toEqual([10, 10, 30, 20]);
  });

  test('parts keep their unit step and a total that the steps can’t make becomes the nearest that they can', () => {
    const series = grid([[12], [24]], { unitStep: 6 });
    expect(column(replay(series, changes([lineScope, 'set to', 100])))).toEqual([36, 66]);
    expect(column(replay(grid([[0.3], [0.6]], { unitStep: 0.1 }), changes([lineScope, 'set to', 1])))).toEqual([
      0.3, 0.7,
    ]);
  });

  test('a mix of steps meets the total exactly as long as one of them can', () => {
    const series = grid([[40], [24]]).map((one, index) => ({ ...one, unitStep: index === 0 ? 1 : 12 }));
    const { plan } = replay(series, changes([lineScope, 'set to', 77]));
    expect(sum(plan.map((row) => row[0]!))).toBe(77);
    expect(plan[1]![0]! % 12).toBe(0);
  });

  test('says which override touched a cell, and only that cell', () => {
    const { overriddenBy } = replay(
      grid([[10], [0], [30]]),
      changes([lineScope, 'set to', 44], [cell(3, 1), 'set to', 33]),
    );
    expect(overriddenBy).toEqual([[1], [null], [2]]);
  });
});

describe('order', () => {
  test('a finer edit made later changes the total', () => {
    const result = replay(grid([[10], [30]]), changes([lineScope, 'set to', 80], [cell(1, 1), 'set to', 50]));
    expect(column(result)).toEqual([50, 60]);
  });

  test('a finer value set earlier holds and the rest takes the change', () => {
    const result = replay(grid([[10], [30]]), changes([cell(1, 1), 'set to', 50], [lineScope, 'set to', 80]));
    expect(column(result)).toEqual([50, 30]);
    const byItem = replay(
      grid([[10], [20], [30], [40]], { locations: 2 }),
      changes([item(1), 'set to', 60], [lineScope, 'scale by', 0.8]),
    );
    expect(column(byItem)).toEqual([20, 40, 19, 25]);
  });

  test('finer additions and factors don’t hold', () => {
    const result = replay(grid([[10], [30]]), changes([cell(1, 1), 'add', 10], [lineScope, 'set to', 100]));
    expect(column(result)).toEqual([40, 60]);
  });

  test('a clear removes earlier changes of the same or a finer scope in its weeks, and no coarser ones', () => {
    const series = grid([
      [10, 10],
      [30, 30],
    ]);
    expect(replay(series, changes([cell(1, 1), 'set to', 50, 0, 1], [item(1), 'clear', null, 1])).plan).toEqual([
      [50, 10],
      [30, 30],
    ]);
    expect(column(replay(series, changes([lineScope, 'set to', 80], [cell(1, 1), 'clear', null])))).toEqual([20, 60]);
    expect(column(replay(series, changes([cell(1, 1), 'clear', null], [cell(1, 1), 'set to', 7])))).toEqual([7, 30]);
  });
});

describe('what can’t be met', () => {
  test('locked weeks keep their numbers against every kind of change', () => {
    const series = grid([
      [10, 10],
      [30, 30],
    ]);
    const { plan, unmet } = replay(
      series,
      changes([lineScope, 'set to', 80, 0, 1], [cell(1, 1), 'add', 5]),
      [0],
      [
        [11, 0],
        [29, 0],
      ],
    );
    expect(plan).toEqual([
      [11, 20],
      [29, 60],
    ]);
    expect(unmet).toEqual([
      { id: 1, weekStart: weekAt(0), reason: 'locked' },
      { id: 2, weekStart: weekAt(0), reason: 'locked' },
    ]);
  });

  test('a total below what is set under it is refused, and has no effect', () => {
    const result = replay(grid([[10], [30]]), changes([cell(1, 1), 'set to', 50], [lineScope, 'set to', 40]));
    expect(column(result)).toEqual([50, 30]);
    expect(result.unmet).toEqual([{ id: 2, weekStart: firstWeek, reason: 'fixed' }]);
  });

  test('a total over nothing but set values can’t change', () => {
    const result = replay(grid([[10]]), changes([cell(1, 1), 'set to', 50], [lineScope, 'add', 1]));
    expect(result.unmet).toEqual([{ id: 2, weekStart: firstWeek, reason: 'fixed' }]);
  });

  test('nothing goes below zero', () => {
    const result = replay(grid([[10], [30]]), changes([lineScope, 'add', -41], [cell(2, 1), 'add', -30]));
    expect(column(result)).toEqual([10, 0]);
    expect(result.unmet).toEqual([{ id: 1, weekStart: firstWeek, reason: 'no-room' }]);
  });

  test('a series that is no longer there has no room', () => {
    const result = replay(grid([[10]]), changes([cell(9, 9), 'set to', 5]));
    expect(result.unmet).toEqual([{ id: 1, weekStart: firstWeek, reason: 'no-room' }]);
  });
});

/** Small lines with up to 12 changes of every kind. */
const cases = fc
  .record({
    items: fc.integer({ min: 1, max: 3 }),
    locations: fc.integer({ min: 1, max: 3 }),
    weeks: fc.integer({ min: 1, max: 3 }),
    models: fc.array(fc.integer({ min: 0, max: 60 }), { minLength: 27, maxLength: 27 }),
    unitSteps: fc.array(fc.constantFrom(1, 1, 2, 6), { minLength: 3, maxLength: 3 }),
    locked: fc.uniqueArray(fc.integer({ min: 0, max: 2 }), { maxLength: 1 }),
    changes: fc.array(
      fc.record({
        itemId: fc.option(fc.integer({ min: 1, max: 3 })),
        locationId: fc.option(fc.integer({ min: 1, max: 3 })),
        from: fc.integer({ min: 0, max: 2 }),
        length: fc.integer({ min: 0, max: 2 }),
        operation: fc.constantFrom(
          'set to' as const,
          'set to' as const,
          'add' as const,
          'scale by' as const,
          'clear' as const,
        ),
        number: fc.integer({ min: -40, max: 150 }),
      }),
      { maxLength: 12 },
    ),
  })
  .map(({ items, locations, weeks, models, unitSteps, locked, changes: drawn }) => {
    const series: ReplayedSeries[] = [];
    for (let itemId = 1; itemId <= items; itemId++) {
      for (let locationId = 1; locationId <= locations; locationId++) {
        const unitStep = unitSteps[itemId - 1]!;
        const model = Array.from({ length: weeks }, (_, week) => unitStep * models[(series.length * 3 + week) % 27]!);
        series.push({ itemId, locationId, unitStep, model });
      }
    }
    const overrides = drawn.map(({ itemId, locationId, from, length, operation, number }, index): ReplayedOverride => {
      const value = { 'set to': Math.abs(number), add: number, 'scale by': Math.abs(number) / 50, clear: null }[
        operation
      ];
      return {
        id: index + 1,
        sequence: index + 1,
        scope: { itemId, locationId },
        firstWeek: weekAt(from),
        lastWeek: weekAt(from + length),
        operation,
        value,
      };
    });
    return { series, weeks, overrides, lockedWeeks: locked.map(weekAt) };
  });

type Case = typeof cases extends fc.Arbitrary<infer Drawn> ? Drawn : never;

function replayCase({ series, weeks, overrides, lockedWeeks }: Case): Replay {
  return replayOverrides({
    series,
    planFirstWeek: firstWeek,
    planWeeks: weeks,
    lockedWeeks,
    lockedPlan: series.map(({ model }) => model.map((units) => units + 3)),
    overrides,
  });
}

/** The same rules written the slow way: cell objects, one week at a time, shares dealt out step by step. */
function replayNaively({ series, weeks, overrides, lockedWeeks }: Case): number[][] {
  const plan = series.map(({ model }) => [...model]);
  for (let week = 0; week < weeks; week++) {
    if (lockedWeeks.includes(weekAt(week))) {
      series.forEach(({ model }, index) => (plan[index]![week] = model[week]! + 3));
      continue;
    }
    const covering = overrides.filter(
      ({ firstWeek: from, lastWeek: to }) =>
        weeksBetween(from, weekAt(week)) >= 0 && weeksBetween(weekAt(week), to) >= 0,
    );
    const inForce = covering.filter(
      (override, at) =>
        override.operation !== 'clear' &&
        !covering.slice(at + 1).some((later) => later.operation === 'clear' && scopeHolds(later.scope, override.scope)),
    );
    const setScopes: Scope[] = [];
    for (const { scope, operation, value } of inForce) {
      const inScope = series.map((_, index) => index).filter((index) => scopeHolds(scope, series[index]!));
      const isHeld = (index: number): boolean =>
        setScopes.some(
          (set) =>
            scopeHolds(set, series[index]!) &&
            scopeHolds(scope, set) &&
            !(set.itemId === scope.itemId && set.locationId === scope.locationId),
        );
      const free = inScope.filter((index) => !isHeld(index));
      const total = sum(inScope.map((index) => plan[index]![week]!));
      const held = total - sum(free.map((index) => plan[index]![week]!));
      const wanted = operation === 'set to' ? value! : operation === 'add' ? total + value! : total * value!;
      const divisor = [6, 2, 1].find((step) => free.every((index) => series[index]!.unitStep % step === 0)) ?? 1;
      const target = free.length === 0 ? wanted - held : divisor * Math.floor((wanted - held) / divisor + 0.5 + 1e-9);
      if (wanted < 0 || target < -1e-9) continue;
      if (free.length === 0) {
        if (Math.floor(target + 0.5 + 1e-9) === 0 && operation === 'set to') setScopes.push(scope);
        continue;
      }
      if (target !== total - held) {
        let weights = free.map((index) => plan[index]![week]!);
        if (sum(weights) === 0) weights = free.map((index) => series[index]!.model[week]!);
        if (sum(weights) === 0) weights = free.map(() => 1);
        const dealt = free.map((index, at) => {
          const step = series[index]!.unitStep;
          const quota = (target * weights[at]!) / sum(weights) / step;
          return { step, units: Math.floor(quota) * step, rest: quota - Math.floor(quota), weight: weights[at]!, at };
        });
        const queue = dealt
          .filter(({ weight }) => weight > 0)
          .sort((a, b) => b.rest - a.rest || b.weight - a.weight || a.at - b.at)
          .concat(dealt.filter(({ weight }) => weight === 0));
        let isFirstRound = true;
        for (let left = target - sum(dealt.map(({ units }) => units)), before = -1; left > 0 && left !== before;) {
          before = left;
          for (const one of queue) {
            if (one.step > left || (isFirstRound && one.weight === 0)) continue;
            one.units += one.step;
            left -= one.step;
          }
          if (isFirstRound) before = -1;
          isFirstRound = false;
        }
        if (free.length === 1) dealt[0]!.units = target;
        if (sum(dealt.map(({ units }) => units)) !== target) continue;
        free.forEach((index, at) => (plan[index]![week] = dealt[at]!.units));
      }
      if (operation === 'set to') setScopes.push(scope);
    }
  }
  return plan;
}

describe('for any changes', () => {
  test('equals a naive reference', () => {
    fc.assert(
      fc.property(cases, (drawn) => {
        expect(replayCase(drawn).plan).toEqual(replayNaively(drawn));
      }),
      { numRuns: 2_000 },
    );
  });

  test('no cell is negative, off its unit step, or changed in a locked week', () => {
    fc.assert(
      fc.property(cases, (drawn) => {
        const { plan } = replayCase(drawn);
        drawn.series.forEach(({ unitStep, model }, index) => {
          plan[index]!.forEach((units, week) => {
            if (drawn.lockedWeeks.includes(weekAt(week))) expect(units).toBe(model[week]! + 3);
            else {
              expect(units).toBeGreaterThanOrEqual(0);
              expect(units % unitStep).toBe(0);
            }
          });
        });
      }),
    );
  });

  test('a total set last is met exactly, or has no effect and is listed', () => {
    fc.assert(
      fc.property(cases, fc.integer({ min: 0, max: 400 }), (drawn, units) => {
        const series = drawn.series.map((one) => ({ ...one, unitStep: 1 }));
        const last: ReplayedOverride = {
          id: 99,
          sequence: 99,
          scope: lineScope,
          firstWeek,
          lastWeek: firstWeek,
          operation: 'set to',
          value: units,
        };
        const before = replayCase({ ...drawn, series });
        const after = replayCase({ ...drawn, series, overrides: [...drawn.overrides, last] });
        const isUnmet = after.unmet.some(({ id }) => id === 99);
        if (isUnmet) expect(column(after)).toEqual(column(before));
        else expect(sum(column(after))).toBe(units);
      }),
      { numRuns: 500 },
    );
  });

  test('setting a total twice changes nothing the second time', () => {
    fc.assert(
      fc.property(cases, fc.integer({ min: 0, max: 400 }), (drawn, units) => {
        const set = (id: number): ReplayedOverride => ({
          id,
          sequence: id,
          scope: lineScope,
          firstWeek,
          lastWeek: weekAt(2),
          operation: 'set to',
          value: units,
        });
        const once = replayCase({ ...drawn, overrides: [...drawn.overrides, set(98)] });
        const twice = replayCase({ ...drawn, overrides: [...drawn.overrides, set(98), set(99)] });
        expect(twice.plan).toEqual(once.plan);
      }),
    );
  });

  test('clearing the line gives the model back wherever it isn’t locked', () => {
    fc.assert(
      fc.property(cases, (drawn) => {
        const clear: ReplayedOverride = {
          id: 99,
          sequence: 99,
          scope: lineScope,
          firstWeek,
          lastWeek: weekAt(2),
          operation: 'clear',
          value: null,
        };
        const { plan, overriddenBy } = replayCase({
          ...drawn,
          lockedWeeks: [],
          overrides: [...drawn.overrides, clear],
        });
        expect(plan).toEqual(drawn.series.map(({ model }) => model));
        expect(overriddenBy.flat().every((id) => id === null)).toBe(true);
      }),
    );
  });
});

test('overrides are listed by the weeks that they are in force, cleared ones left out', () => {
  const overrides = changes([cell(1, 1), 'set to', 5, 0, 2], [lineScope, 'clear', null, 1], [item(1), 'add', 2, 2, 9]);
  const byWeek = overridesByWeek(overrides, firstWeek, 3);
  expect(byWeek.map((ofWeek) => ofWeek.map(({ id }) => id))).toEqual([[1], [], [1, 3]]);
});

test('scopes hold what lies under them and meet where they share a series', () => {
  expect(scopeHolds(lineScope, cell(1, 2))).toBe(true);
  expect(scopeHolds(item(1), location(2))).toBe(false);
  expect(scopesMeet(item(1), location(2))).toBe(true);
  expect(scopesMeet(item(1), cell(2, 2))).toBe(false);
});

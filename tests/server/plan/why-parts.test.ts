import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { replayBySteps, shareCell, shareModel, type WhyCell } from '../../../server/features/plan/why-parts.ts';
import { forecastLine } from '../../../server/forecasting/forecast-line.ts';
import { roundToSteps } from '../../../server/forecasting/round-to-steps.ts';
import { replayOverrides, type ReplayedOverride, type Scope } from '../../../shared/domain/override-arithmetic.ts';
import { generateLine } from '../forecasting/canonical-line.ts';

const week = '2026-11-30';
const log = fc.double({ min: -1.5, max: 1.5, noNaN: true });
const factorNames = ['price', 'season', 'holiday', 'trend', 'recent level', 'promotion', 'around', 'neighbours'];

/** A cell as a forecast gives it: base and mean are the products of their factors, each with its factor from median to mean. */
const forecastCell = fc
  .record({
    level: fc.double({ min: -2, max: 11, noNaN: true }),
    logs: fc.array(log, { minLength: factorNames.length, maxLength: factorNames.length }),
    smearingOther: fc.double({ min: 0.8, max: 2, noNaN: true }),
    smearingPromoted: fc.double({ min: 0.8, max: 2, noNaN: true }),
    unitStep: fc.constantFrom(1, 6, 0.5),
    remainder: fc.double({ min: -0.5, max: 0.5, noNaN: true }),
  })
  .map(({ level, logs, smearingOther, smearingPromoted, unitStep, remainder }) => {
    const logParts = { level, ...Object.fromEntries(factorNames.map((name, at) => [name, logs[at]!])) };
    const add = (names: readonly string[]): number =>
      names.reduce((total, name) => total + (logParts as Record<string, number>)[name]!, 0);
    const base = Math.exp(level + add(factorNames.slice(0, 5))) * smearingOther;
    const mean = Math.exp(level + add(factorNames)) * smearingPromoted;
    const model = roundToSteps([mean], unitStep, remainder * unitStep).rounded[0]!;
    return { unitStep, model, mean, base, logParts, smearingOther, smearingPromoted };
  });

const place = <Cell>(cell: Cell, at: number): Cell & { itemId: number; locationId: number } => ({
  ...cell,
  itemId: 1 + (at % 4),
  locationId: 1 + Math.floor(at / 4),
});
const cellsOf = fc.array(forecastCell, { minLength: 1, maxLength: 12 }).map((cells) => cells.map(place));

const add = (values: readonly number[]): number => values.reduce((total, value) => total + value, 0);
const multiply = (factors: readonly (number | null)[]): number =>
  factors.reduce<number>((product, factor) => product * (factor ?? 1), 1);
const expectNear = (actual: number, expected: number, scale = expected): void =>
  expect(Math.abs(actual - expected)).toBeLessThanOrEqual(1e-9 * Math.max(1, Math.abs(scale)));

describe('parts of the model', () => {
  it('add up to base and uplift, and with the rounding to the model, of a cell and of a total', () => {
    fc.assert(
      fc.property(cellsOf, (cells) => {
        const { base, uplift, rounding, model } = shareModel(cells);
        const size = add(cells.map((cell) => cell.base + cell.mean)) + base.parts[0]!.units;
        expectNear(add(base.parts.map(({ units }) => units)), base.units, size);
        expectNear(add(uplift.parts.map(({ units }) => units)), uplift.units, size);
        expectNear(base.units + uplift.units + rounding, model, size);
        expectNear(model, add(cells.map((cell) => cell.model)), size);
      }),
    );
  });

  it('are in a total the sums of those of its series', () => {
    fc.assert(
      fc.property(cellsOf, (cells) => {
        const whole = shareModel(cells);
        const each = cells.map((cell) => shareModel([cell]));
        whole.base.parts.forEach(({ name, units }, at) => {
          expect(each.map((one) => one.base.parts[at]!.name)).toEqual(each.map(() => name));
          const own = each.map((one) => one.base.parts[at]!.units);
          expectNear(units, add(own), add(own.map(Math.abs)));
        });
        whole.uplift.parts.forEach(({ units }, at) => {
          const own = each.map((one) => one.uplift.parts[at]!.units);
          expectNear(units, add(own), add(own.map(Math.abs)));
        });
        expectNear(whole.rounding, add(each.map(({ rounding }) => rounding)), add(cells.map(({ mean }) => mean)));
      }),
    );
  });

  it('have factors that multiply from the level to the base and from the base to the mean', () => {
    fc.assert(
      fc.property(cellsOf, (cells) => {
        const { base, uplift } = shareModel(cells);
        expectNear(base.parts[0]!.units * multiply(base.parts.map(({ factor }) => factor)), base.units);
        expectNear(multiply(uplift.parts.map(({ factor }) => factor)), uplift.factor!);
      }),
    );
  });

  it('give a series its own factors, the one from median to mean of ordinary weeks to the level, the rest of it to the promotion', () => {
    fc.assert(
      fc.property(forecastCell, (made) => {
        const { base, uplift } = shareModel([place(made, 0)]);
        const { logParts, smearingOther, smearingPromoted } = made;
        const partsByName = logParts as Record<string, number>;
        for (const { name, factor } of [...base.parts.slice(1), ...uplift.parts.slice(1)]) {
          expectNear(factor!, Math.exp(partsByName[name]!));
        }
        expectNear(base.parts[0]!.units, Math.exp(logParts.level) * smearingOther);
        expectNear(uplift.parts[0]!.factor!, (Math.exp(partsByName['promotion']!) * smearingPromoted) / smearingOther);
      }),
    );
  });

  it('are all nothing outside a listing, where the forecast is 0 whatever its factors', () => {
    const parts = shareCell({ mean: 0, base: 0, logParts: { level: 3, price: 0.2, promotion: 0.4 } });
    expect([...Object.values(parts.base), ...Object.values(parts.uplift)]).toEqual(new Array(9).fill(0));
    const nothing = { itemId: 1, locationId: 1, unitStep: 1, model: 0, mean: 0, base: 0, logParts: {} };
    expect(shareModel([nothing]).base.parts[1]!.factor).toBeNull();
  });

  it('of an average without factors are its level alone', () => {
    const { base, uplift, rounding } = shareModel([
      { itemId: 1, locationId: 1, unitStep: 1, model: 12, mean: 12.4, base: 12.4, logParts: { level: Math.log(12.4) } },
    ]);
    expectNear(base.parts[0]!.units, 12.4);
    expect([...base.parts.slice(1), ...uplift.parts].map(({ units }) => Math.abs(units))).toEqual(new Array(8).fill(0));
    expectNear(rounding, -0.4);
  });

  it('of a real forecast show no uplift where nothing is promoted, and the same level in all weeks where neighbours keep their prices', () => {
    const input = generateLine({ items: 4, weeks: 104 });
    const { series } = forecastLine({
      ...input,
      series: input.series.map((one, s) => ({
        ...one,
        planned: one.planned.map((planned, h) => ({
          ...planned,
          price: s === 0 && h === 3 ? 1.5 : 2,
          feature: s === 0 && h === 3 ? 1 : 0,
        })),
      })),
    });
    const whyOf = (s: number, h: number) => {
      const { mean, base, parts } = series[s]!;
      const logParts = Object.fromEntries(Object.entries(parts).map(([name, values]) => [name, values[h]!]));
      return shareCell({ mean: mean[h]!, base: base[h]!, logParts });
    };
    for (let s = 0; s < series.length; s++) {
      for (const h of [0, 6]) {
        const { base, uplift } = whyOf(s, h);
        for (const units of Object.values(uplift)) expectNear(units, 0, base.level);
        expectNear(base.level, whyOf(s, 3).base.level);
      }
    }
    const promoted = whyOf(0, 3).uplift;
    expect(promoted.promotion).toBeGreaterThan(0.2 * series[0]!.base[3]!);
    expect(promoted.promotion + promoted.around + promoted.neighbours).toBeCloseTo(
      series[0]!.mean[3]! - series[0]!.base[3]!,
      8,
    );
  });
});

const scopeOf: fc.Arbitrary<Scope> = fc.record({
  itemId: fc.option(fc.integer({ min: 1, max: 4 })),
  locationId: fc.option(fc.integer({ min: 1, max: 3 })),
});
const overridesOf = fc
  .array(
    fc.record({
      scope: scopeOf,
      operation: fc.constantFrom('set to' as const, 'add' as const, 'scale by' as const, 'clear' as const),
      units: fc.integer({ min: 0, max: 900 }),
    }),
    { maxLength: 45 },
  )
  .map((all) =>
    all.map(({ scope, operation, units }, index): ReplayedOverride => ({
      id: 100 + index,
      sequence: index,
      scope,
      firstWeek: week,
      lastWeek: week,
      operation,
      value: operation === 'clear' ? null : operation === 'scale by' ? 0.5 + units / 600 : units,
    })),
  );

describe('steps of the overrides', () => {
  const cells: WhyCell[] = Array.from({ length: 12 }, (_, at) =>
    place({ unitStep: 1, model: 40 + 7 * at, mean: 40 + 7 * at, base: 40, logParts: {} }, at),
  );

  it('lead from the model to the plan that the replay of all of them gives', () => {
    fc.assert(
      fc.property(overridesOf, scopeOf, (overrides, scope) => {
        const inScope = (cell: WhyCell): boolean =>
          (scope.itemId === null || scope.itemId === cell.itemId) &&
          (scope.locationId === null || scope.locationId === cell.locationId);
        const { steps, replayed } = replayBySteps(cells, week, overrides, scope);
        const { plan } = replayOverrides({
          series: cells.map((cell) => ({ ...cell, model: [cell.model] })),
          planFirstWeek: week,
          planWeeks: 1,
          lockedWeeks: [],
          lockedPlan: null,
          overrides,
        });
        const model = add(cells.filter(inScope).map((cell) => cell.model));
        expectNear(replayed, add(plan.flatMap((row, at) => (inScope(cells[at]!) ? row : []))));
        expectNear(model + add(steps.map(({ units }) => units)), replayed);
        expect(steps.length).toBeLessThanOrEqual(31);
      }),
      { numRuns: 60 },
    );
  });

  it('name each override with what it changed', () => {
    const one = { itemId: 1, locationId: 1 };
    const made = (id: number, scope: Scope, operation: 'add' | 'scale by', value: number): ReplayedOverride => ({
      id,
      sequence: id,
      scope,
      firstWeek: week,
      lastWeek: week,
      operation,
      value,
    });
    const { steps } = replayBySteps(
      cells,
      week,
      [
        made(1, one, 'add', 10),
        made(2, { itemId: 2, locationId: null }, 'add', 60),
        made(3, { itemId: null, locationId: null }, 'scale by', 2),
      ],
      one,
    );
    expect(steps).toEqual([
      { overrideIds: [1], units: 10 },
      { overrideIds: [3], units: 50 },
    ]);
  });
});

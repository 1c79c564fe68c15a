import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { WhyNumber } from '../../../shared/contracts/plan.ts';
import { listWhyRows } from '../../../src/features/plan/why-rows.ts';

const baseNames = ['level', 'price', 'season', 'holiday', 'trend', 'recent level'] as const;
const upliftNames = ['promotion', 'around', 'neighbours'] as const;
const add = (values: readonly number[]): number => values.reduce((total, value) => total + value, 0);

function answer(given: {
  base: readonly number[];
  uplift?: readonly number[];
  steps?: readonly number[];
  held?: number;
}): WhyNumber {
  const { base, uplift = [0, 0, 0], steps = [], held = 0 } = given;
  const mean = add(base) + add(uplift);
  const model = Math.max(0, Math.round(mean));
  return {
    scope: { itemId: 1, locationId: null },
    weekStart: '2026-11-30',
    version: 4,
    series: 2,
    base: {
      units: add(base),
      parts: baseNames.map((name, at) => ({ name, units: base[at] ?? 0, factor: at === 0 ? null : 1.1 })),
    },
    uplift: {
      units: add(uplift),
      factor: 1.5,
      parts: upliftNames.map((name, at) => ({ name, units: uplift[at] ?? 0, factor: 1.2 })),
    },
    rounding: model - mean,
    model,
    overrides: { units: add(steps), steps: steps.map((units, at) => ({ overrideIds: [at + 1], units })) },
    held,
    plan: model + add(steps) + held,
    lastYear: { weekStart: '2025-12-01', units: null },
    lastPromotion: null,
  };
}

const units = fc.double({ min: -400, max: 400, noNaN: true });
const answers = fc.record({
  base: fc.array(units, { minLength: 6, maxLength: 6 }).map(([, ...parts]) => [3000, ...parts]),
  uplift: fc.array(units, { minLength: 3, maxLength: 3 }),
  steps: fc.array(fc.integer({ min: -50, max: 300 }), { maxLength: 4 }),
  held: fc.integer({ min: -20, max: 20 }),
});

describe('the table of parts', () => {
  it('shows figures that add up to each sum and to the plan, however they are rounded', () => {
    fc.assert(
      fc.property(answers, fc.integer({ min: 0, max: 90 }), (given, unsaved) => {
        const why = answer(given);
        const rows = listWhyRows(why, { shownPlan: why.plan + unsaved, isEarlier: false });
        const shownOf = (group: string): number =>
          add(rows.filter((row) => row.kind === 'part' && row.group === group).map(({ shown }) => shown));
        const sumOf = (group: string): number => rows.find((row) => row.key === `sum ${group}`)?.shown ?? 0;
        expect(shownOf('base')).toBe(sumOf('base'));
        expect(shownOf('uplift')).toBe(sumOf('uplift'));
        expect(sumOf('base') + sumOf('uplift') + shownOf('rounding')).toBe(sumOf('model'));
        expect(sumOf('model')).toBe(why.model);
        expect(sumOf('model') + add(['override', 'held', 'unsaved'].map(shownOf))).toBe(why.plan + unsaved);
      }),
    );
  });

  it('lets every part start where the last shown one ended, but for what shows as nothing', () => {
    fc.assert(
      fc.property(answers, (given) => {
        const why = answer(given);
        let running = 0;
        for (const row of listWhyRows(why, { shownPlan: why.plan, isEarlier: false })) {
          if (row.kind === 'part') expect(Math.abs(row.from - running)).toBeLessThan(1);
          running = row.to;
        }
        expect(Math.abs(running - why.plan)).toBeLessThan(1);
      }),
    );
  });

  it('leaves out what changes nothing, and the uplift where nothing is promoted', () => {
    const why = answer({ base: [200, 0, 30, 0, 0, 0] });
    expect(listWhyRows(why, { shownPlan: 230, isEarlier: false }).map(({ key }) => key)).toEqual([
      'level',
      'season',
      'sum base',
      'sum model',
    ]);
  });

  it('keeps a decimal where few are sold', () => {
    const why = answer({ base: [10.26, 0, 1.13] });
    expect(listWhyRows(why, { shownPlan: 11, isEarlier: false }).map(({ key, shown }) => [key, shown])).toEqual([
      ['level', 10.3],
      ['season', 1.1],
      ['sum base', 11.4],
      ['rounding', -0.4],
      ['sum model', 11],
    ]);
  });

  it('tells the overrides of an earlier version as one, since the steps are those of the newest', () => {
    const why = answer({ base: [200], steps: [20, 30] });
    const rows = listWhyRows(why, { shownPlan: 215, isEarlier: true });
    expect(rows.filter(({ group }) => group === 'override')).toMatchObject([{ overrideId: null, shown: 15 }]);
    expect(rows.at(-1).to).toBe(215);
  });
});

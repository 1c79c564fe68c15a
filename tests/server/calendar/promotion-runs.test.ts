import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { listWeeks } from '../../../shared/domain/weeks.ts';
import { groupPromotionWeeks, type PromotionWeek } from '../../../server/features/calendar/promotion-runs.ts';

const plain = { name: 'Offer', depth: 0.2, price: null, feature: 0, display: 0, mechanics: {} };

describe('joining promotion weeks', () => {
  it('breaks at a hole, at other terms, and nowhere else', () => {
    const week = (weekStart: string, given: Partial<PromotionWeek> = {}): PromotionWeek => ({
      itemId: 1,
      locationId: 1,
      weekStart,
      ...plain,
      ...given,
    });
    const runs = groupPromotionWeeks([
      week('2026-03-02'),
      week('2026-03-16'),
      week('2026-02-23'),
      week('2026-03-23', { depth: 0.3 }),
      week('2026-03-30', { depth: 0.3, mechanics: { coupon: 0 } }),
    ]);
    expect(runs.map(({ firstWeek, lastWeek, depth }) => [firstWeek, lastWeek, depth])).toEqual([
      ['2026-02-23', '2026-03-02', 0.2],
      ['2026-03-16', '2026-03-16', 0.2],
      ['2026-03-23', '2026-03-30', 0.3],
    ]);
  });

  it('gives every week back exactly once, whatever comes in', () => {
    const key = fc.record({
      itemId: fc.integer({ min: 1, max: 3 }),
      locationId: fc.integer({ min: 1, max: 3 }),
      week: fc.integer({ min: 0, max: 7 }),
    });
    const weeks = fc
      .uniqueArray(key, { selector: (k) => `${k.itemId}|${k.locationId}|${k.week}`, maxLength: 72 })
      .chain((keys) =>
        fc.tuple(
          fc.constant(keys),
          fc.array(fc.constantFrom(0.1, 0.2), { minLength: keys.length, maxLength: keys.length }),
        ),
      );
    const starts = listWeeks('2026-01-05', 8);
    fc.assert(
      fc.property(weeks, ([keys, depths]) => {
        const given = keys.map(({ itemId, locationId, week }, index) => ({
          ...plain,
          itemId,
          locationId,
          weekStart: starts[week] ?? '',
          depth: depths[index] ?? 0,
        }));
        const returned = groupPromotionWeeks(given).flatMap((run) =>
          run.itemIds.flatMap((itemId) =>
            run.locationIds.flatMap((locationId) =>
              starts
                .filter((weekStart) => weekStart >= run.firstWeek && weekStart <= run.lastWeek)
                .map((weekStart) => `${itemId}|${locationId}|${weekStart}|${run.depth}`),
            ),
          ),
        );
        const expected = given.map((week) => `${week.itemId}|${week.locationId}|${week.weekStart}|${week.depth}`);
        expect(returned.sort()).toEqual(expected.sort());
      }),
      { seed: 20261201 },
    );
  });
});

import { describe, expect, test } from 'vitest';
import { expectPrices } from '../../../server/features/plan/expected-price.ts';
import type { PlannedWeek, SoldWeek } from '../../../server/forecasting/types.ts';
import { listWeeks } from '../../../shared/domain/weeks.ts';

const weeks = listWeeks('2026-11-30', 3);
const sold = (price: number, given: Partial<SoldWeek> = {}): SoldWeek => ({
  weekStart: '2026-11-23',
  units: 10,
  price,
  regularPrice: Number.NaN,
  feature: 0,
  display: 0,
  mechanics: {},
  gap: 0,
  daysOpen: 7,
  ...given,
});
const planned = (week: number, given: Partial<PlannedWeek>): PlannedWeek => ({
  weekStart: weeks[week]!,
  price: Number.NaN,
  regularPrice: Number.NaN,
  depth: Number.NaN,
  feature: 0,
  display: 0,
  mechanics: {},
  ...given,
});

describe('the expected price', () => {
  test('is the last regular price, not the one paid in a promotion', () => {
    expect(expectPrices([sold(2), sold(1.5, { feature: 1 })], [], weeks)).toEqual([2, 2, 2]);
    expect(expectPrices([sold(1.5, { regularPrice: 2.2 })], [], weeks)).toEqual([2.2, 2.2, 2.2]);
  });

  test('is the planned price, or the regular one less the planned depth', () => {
    const plan = [
      planned(0, { price: 1.79 }),
      planned(1, { depth: 0.25 }),
      planned(2, { regularPrice: 3, depth: 0.1 }),
    ];
    expect(expectPrices([sold(2)], plan, weeks)).toEqual([1.79, 1.5, 2.7]);
  });

  test('is unknown where no price was ever known', () => {
    expect(expectPrices([sold(Number.NaN)], [], weeks)).toEqual([null, null, null]);
    expect(expectPrices([], [planned(1, { depth: 0.5 })], weeks)).toEqual([null, null, null]);
  });
});

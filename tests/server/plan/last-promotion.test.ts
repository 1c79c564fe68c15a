import { expect, test } from 'vitest';
import { findLastSimilarPromotion, type ItemWeek } from '../../../server/features/plan/last-promotion.ts';
import { addWeeks } from '../../../shared/domain/weeks.ts';

const firstWeek = '2026-01-05';
const sell = (promoted: Record<number, Partial<ItemWeek>>, weeks = 20): ItemWeek[] =>
  Array.from({ length: weeks }, (_, at) => ({
    weekStart: addWeeks(firstWeek, at),
    units: 100 + (at % 3),
    isPromoted: at in promoted,
    depth: null,
    feature: 0,
    display: 0,
    ...promoted[at],
  }));
const advertisedCut = { depth: 0.25, feature: 1, display: 0 };

test('the newest run of promoted weeks on like terms is found, with units a week beside ordinary weeks before it', () => {
  const weeks = sell({
    4: { units: 180, depth: 0.2, feature: 1 },
    12: { units: 240, depth: 0.3, feature: 1 },
    13: { units: 200, depth: 0.26, feature: 1 },
  });
  expect(findLastSimilarPromotion(weeks, advertisedCut)).toEqual({
    firstWeek: addWeeks(firstWeek, 12),
    lastWeek: addWeeks(firstWeek, 13),
    weeks: 2,
    depth: expect.closeTo(0.28, 10) as number,
    isFeatured: true,
    isDisplayed: false,
    unitsAWeek: 220,
    ordinaryUnitsAWeek: 101,
  });
});

test('a promotion with another cut, without advertising or with a second placement isn’t similar', () => {
  expect(findLastSimilarPromotion(sell({ 12: { depth: 0.4, feature: 1 } }), advertisedCut)).toBeNull();
  expect(findLastSimilarPromotion(sell({ 12: { depth: 0.25 } }), advertisedCut)).toBeNull();
  expect(findLastSimilarPromotion(sell({ 12: { depth: 0.25, feature: 1, display: 1 } }), advertisedCut)).toBeNull();
  expect(findLastSimilarPromotion(sell({}), advertisedCut)).toBeNull();
});

test('an older similar promotion stands in where the newest one differs', () => {
  const weeks = sell({ 5: { depth: 0.25, feature: 1 }, 12: { depth: 0.25 } });
  expect(findLastSimilarPromotion(weeks, advertisedCut)?.firstWeek).toBe(addWeeks(firstWeek, 5));
});

test('a week that wasn’t sent ends a run, and too few ordinary weeks give no comparison', () => {
  const weeks = sell({
    2: { depth: 0.25, feature: 1 },
    3: { depth: 0.25, feature: 1 },
    4: { depth: 0.25, feature: 1 },
  });
  const withHole = weeks.filter((_, at) => at !== 3);
  expect(findLastSimilarPromotion(withHole, advertisedCut)?.weeks).toBe(1);
  expect(findLastSimilarPromotion(weeks, advertisedCut)).toMatchObject({ weeks: 3, ordinaryUnitsAWeek: null });
});

test('an unknown cut on either side leaves the other terms to decide', () => {
  expect(findLastSimilarPromotion(sell({ 12: { feature: 1 } }), advertisedCut)).toMatchObject({ depth: null });
  expect(
    findLastSimilarPromotion(sell({ 12: { depth: 0.5, feature: 1 } }), { ...advertisedCut, depth: null })?.depth,
  ).toBe(0.5);
});

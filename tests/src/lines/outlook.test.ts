import { expect, it } from 'vitest';
import { describeOutlook } from '../../../src/features/lines/outlook.ts';

const empty = {
  method: 'regression',
  gapAt: [],
  promotedAt: [],
  base: [],
  p2_5: [],
  p10: [],
  p50: [],
  p90: [],
  p97_5: [],
  lastYear: [],
  price: [],
  marks: {},
};

it('sums what is known of the sold weeks, and puts model, plan and ranges after the seam', () => {
  const weeks = describeOutlook({
    historyFirstWeek: '2026-11-16',
    planFirstWeek: '2026-11-30',
    planWeeks: 1,
    series: [
      { ...empty, itemId: 1, locationId: 1, units: [4, null], model: [5], plan: [6] },
      { ...empty, itemId: 2, locationId: 1, units: [3, null], model: [7], plan: [7] },
    ],
    totals: [{ scope: { itemId: null, locationId: null }, p2_5: [8], p10: [9], p50: [12], p90: [15], p97_5: [17] }],
  });
  expect(weeks).toEqual([
    { weekStart: '2026-11-16', sold: 7, planned: null },
    { weekStart: '2026-11-23', sold: null, planned: null },
    {
      weekStart: '2026-11-30',
      sold: null,
      planned: { model: 12, plan: 13, low95: 8, low80: 9, high80: 15, high95: 17 },
    },
  ]);
});

it('is empty before the first forecast', () => {
  expect(
    describeOutlook({ historyFirstWeek: null, planFirstWeek: null, planWeeks: 0, series: [], totals: [] }),
  ).toEqual([]);
});

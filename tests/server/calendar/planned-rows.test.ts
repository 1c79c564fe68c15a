import { describe, expect, it } from 'vitest';
import { readPlannedRows, type PlannedRow } from '../../../server/features/calendar/planned-rows.ts';

function row(given: Partial<PlannedRow>): PlannedRow {
  return {
    itemId: 1,
    locationId: 1,
    weekStart: '2026-03-02',
    price: null,
    regularPrice: null,
    depth: null,
    feature: null,
    display: null,
    mechanics: null,
    promotionName: null,
    ...given,
  };
}

describe('rows of a calendar file', () => {
  it('take the depth from the two prices where the file states none', () => {
    const { promotions } = readPlannedRows([row({ price: 1.5, regularPrice: 2 })]);
    expect(promotions).toMatchObject([{ depth: 0.25, price: 1.5, name: '25 % off' }]);
  });

  it('take a rounding of the price for no promotion', () => {
    const { promotions, unpromoted } = readPlannedRows([row({ price: 1.99, regularPrice: 1.995 })]);
    expect(promotions).toEqual([]);
    expect(unpromoted).toHaveLength(1);
  });

  it('take a lone price for the regular one, but a featured price not', () => {
    const { prices } = readPlannedRows([row({ price: 3 }), row({ price: 2, feature: 1, weekStart: '2026-03-09' })]);
    expect(prices).toEqual([{ itemId: 1, locationId: 1, firstWeek: '2026-03-02', regularPrice: 3 }]);
  });

  it('state a regular price only where it changes, per item and location', () => {
    const { prices } = readPlannedRows([
      row({ regularPrice: 2 }),
      row({ regularPrice: 2, weekStart: '2026-03-09' }),
      row({ regularPrice: 2.2, weekStart: '2026-03-16' }),
      row({ regularPrice: 2, weekStart: '2026-03-23' }),
      row({ regularPrice: 2, locationId: 2 }),
    ]);
    expect(prices.map(({ locationId, firstWeek, regularPrice }) => [locationId, firstWeek, regularPrice])).toEqual([
      [1, '2026-03-02', 2],
      [1, '2026-03-16', 2.2],
      [1, '2026-03-23', 2],
      [2, '2026-03-02', 2],
    ]);
  });
});

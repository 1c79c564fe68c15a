import { describe, expect, it } from 'vitest';
import { layBars, listMonths, listPriceSteps } from '../../../../src/features/calendar/layout.ts';

const promotion = (name: string, firstWeek: string, lastWeek: string, itemIds = [1]) => ({
  name,
  firstWeek,
  lastWeek,
  itemIds,
  locationIds: [1],
  depth: 0.2,
  feature: 0,
  display: 0,
  mechanics: {},
});

describe('bars', () => {
  const view = {
    firstWeek: '2026-11-30',
    weeks: 10,
    promotions: [
      promotion('A', '2026-11-16', '2026-12-07'),
      promotion('B', '2026-12-07', '2026-12-14'),
      promotion('C', '2026-12-14', '2026-12-14'),
      promotion('D', '2026-12-21', '2026-12-28', [2]),
      promotion('E', '2026-10-05', '2026-10-12'),
    ],
  };

  it('begin at the rim where a promotion began earlier, and leave out what is past', () => {
    const bars = layBars(view, [1]);
    expect(bars.map(({ promotion: { name }, first, last }) => [name, first, last])).toEqual([
      ['A', 0, 1],
      ['B', 1, 2],
      ['C', 2, 2],
    ]);
  });

  it('of the same weeks stand in lanes of their own, and a free lane is used again', () => {
    expect(layBars(view, [1]).map(({ lane }) => lane)).toEqual([0, 1, 0]);
  });

  it('leave room for a name that stands beside its bar', () => {
    const wordy = {
      ...view,
      promotions: [promotion('Neighbour days', '2026-11-30', '2026-11-30'), promotion('B', '2026-12-07', '2026-12-07')],
    };
    const bars = layBars(wordy, [1]);
    expect(bars[0]?.isLabelBeside).toBe(true);
    expect(bars.map(({ lane }) => lane)).toEqual([0, 1]);
  });

  it('keep a long name inside where there is no room at the rim', () => {
    const late = { ...view, promotions: [promotion('Neighbour days', '2027-02-01', '2027-02-01')] };
    expect(layBars(late, [1])[0]).toMatchObject({ first: 9, isLabelBeside: false });
  });
});

describe('price steps', () => {
  const price = (weekStart: string, regularPrice: number, locationId: number | null = null) => ({
    itemId: 1,
    locationId,
    weekStart,
    regularPrice,
  });

  it('carry the last price on and show changes only', () => {
    const steps = listPriceSteps(
      {
        firstWeek: '2026-11-30',
        weeks: 6,
        prices: [price('2026-10-05', 5.49), price('2026-12-14', 5.69), price('2026-12-21', 5.69)],
      },
      1,
    );
    expect(steps).toEqual([
      { position: 0, price: 5.49, before: null, isMixed: false },
      { position: 2, price: 5.69, before: 5.49, isMixed: false },
    ]);
  });

  it('show the middle price where locations differ, and say so', () => {
    const prices = [price('2026-11-30', 5, 1), price('2026-11-30', 6, 2), price('2026-11-30', 7, 3)];
    expect(listPriceSteps({ firstWeek: '2026-11-30', weeks: 2, prices }, 1)).toEqual([
      { position: 0, price: 6, before: null, isMixed: true },
    ]);
  });

  it('of an item without a price are none', () => {
    expect(listPriceSteps({ firstWeek: '2026-11-30', weeks: 2, prices: [] }, 1)).toEqual([]);
  });
});

it('joins weeks into months', () => {
  expect(listMonths('2026-11-23', 4).map(({ first, weeks }) => [first, weeks])).toEqual([
    [0, 2],
    [2, 2],
  ]);
});

import { describe, expect, it } from 'vitest';
import { buildLinePanel, switchOffComingPromotions } from '../../../../server/forecasting/features/line-panel.ts';
import {
  averageUnits,
  buildAttraction,
  buildNeighbourPrice,
} from '../../../../server/forecasting/features/neighbour-columns.ts';
import { inferRegularPrice } from '../../../../server/forecasting/features/regular-price.ts';
import { buildHolidays, buildTrend } from '../../../../server/forecasting/features/season-columns.ts';
import { addWeeks } from '../../../../shared/domain/weeks.ts';
import { FIRST_WEEK, generateLine, plannedWeek, soldWeek } from '../canonical-line.ts';

const unknown = (length: number): Float64Array => new Float64Array(length).fill(Number.NaN);

describe('inferred regular price', () => {
  it('is the most frequent unpromoted price of the last weeks, the higher of ties', () => {
    const price = Float64Array.of(2, 2, 1.5, 2, 1.5, 1.5, 1.2);
    const { regular } = inferRegularPrice(price, unknown(7), [0, 0, 0, 0, 0, 0, 1]);
    expect([...regular]).toEqual([2, 2, 2, 2, 2, 2, 2]);
  });

  it('looks back only: a later price changes no earlier week', () => {
    const early = Float64Array.of(2, 2, 2, 1.8, 1.8, 1.8, 1.8, 1.8);
    const late = early.slice();
    late.fill(9, 5);
    const flags = new Uint8Array(8);
    const first = inferRegularPrice(early, unknown(8), flags).regular.slice(0, 5);
    expect(inferRegularPrice(late, unknown(8), flags).regular.slice(0, 5)).toEqual(first);
  });

  it('rises with an unpromoted price above it', () => {
    expect([...inferRegularPrice(Float64Array.of(2, 2, 2.5), unknown(3), [0, 0, 0]).regular]).toEqual([2, 2, 2.5]);
  });

  it('gives way to a stated one', () => {
    const given = Float64Array.of(Number.NaN, 3, Number.NaN);
    expect([...inferRegularPrice(Float64Array.of(2, 2, 2), given, [0, 1, 1]).regular]).toEqual([2, 3, 3]);
  });
});

describe('the week axis of a line', () => {
  it('reads nothing sold after the origin', () => {
    const input = generateLine({ items: 2, weeks: 30 });
    const later = {
      ...input,
      series: input.series.map((series) => ({
        ...series,
        sold: [...series.sold, soldWeek(31, { units: 1e6, price: 99 })],
      })),
    };
    expect(buildLinePanel(later).series.map((one) => one.units)).toEqual(
      buildLinePanel(input).series.map((one) => one.units),
    );
  });

  it('takes the planned depth off the last regular price where no price is planned', () => {
    const sold = Array.from({ length: 10 }, (_, t) => soldWeek(t, { price: 4, regularPrice: 4 }));
    const planned = [plannedWeek(10, { price: Number.NaN, regularPrice: Number.NaN, depth: 0.25 })];
    const panel = buildLinePanel({
      line: 'one',
      series: [{ item: 'a', location: 'All', unitStep: 1, sold, planned, listedFrom: null, listedTo: null }],
      holidays: [],
      origin: addWeeks(FIRST_WEEK, 9),
      horizon: 1,
      seed: 1,
    });
    expect(Math.exp(panel.series[0]!.lnRegular[10]! + panel.series[0]!.lnDepth[10]!)).toBeCloseTo(3, 10);
    const off = switchOffComingPromotions(panel).series[0]!;
    expect(Math.exp(off.lnRegular[10]! + off.lnDepth[10]!)).toBeCloseTo(4, 10);
  });

  it('offsets part weeks by the days open', () => {
    const input = generateLine({ items: 1, weeks: 12 });
    const series = input.series[0]!;
    const sold = series.sold.map((week, t) => (t === 4 ? { ...week, daysOpen: 3 } : week));
    const panel = buildLinePanel({ ...input, series: [{ ...series, sold }] });
    expect(panel.series[0]!.offset[4]).toBeCloseTo(Math.log(3 / 7), 12);
    expect(panel.series[0]!.offset[5]).toBe(0);
  });
});

describe('neighbours', () => {
  it('have a price index that weighs the other items by their units, and leaves the item itself out', () => {
    const panel = buildLinePanel(generateLine({ items: 3, weeks: 60 }));
    const weights = averageUnits(panel);
    const index = buildNeighbourPrice(panel, weights);
    const priceOf = (s: number, t: number): number => panel.series[s]!.lnRegular[t]! + panel.series[s]!.lnDepth[t]!;
    const change = (s: number): number => priceOf(s, 20) - priceOf(s, 21);
    const expected = (weights[1]! * change(1) + weights[2]! * change(2)) / (weights[1]! + weights[2]!);
    expect(index.values[0]![20]! - index.values[0]![21]!).toBeCloseTo(expected, 10);
  });

  it('have the attraction ln Σ exp of the others’ own parts', () => {
    const panel = buildLinePanel(generateLine({ items: 3, weeks: 20 }));
    const parts = panel.series.map((_, s) => new Float64Array(panel.weeks.length).fill(s));
    expect(buildAttraction(panel, parts).values[0]![3]).toBeCloseTo(Math.log(Math.exp(1) + Math.exp(2)), 12);
  });

  it('attract nobody where a series stands alone', () => {
    const panel = buildLinePanel(generateLine({ items: 1, weeks: 20 }));
    const parts = [new Float64Array(panel.weeks.length).fill(3)];
    expect(new Set(buildAttraction(panel, parts).values[0])).toEqual(new Set([0]));
  });
});

describe('holidays and trend', () => {
  it('share a feast’s seven shopping days out by the day of the trading week it falls on', () => {
    const panel = buildLinePanel(generateLine({ items: 1, weeks: 30 }));
    const feastOn = (dayInWeek: number): number[] => {
      const columns = buildHolidays(panel, [{ name: 'feast', weekStart: addWeeks(FIRST_WEEK, 10), dayInWeek }]);
      const valueOf = (when: string, t: number): number =>
        columns.find((column) => column.name === `feast: week ${when}`)?.values[0]![t] ?? 0;
      return [valueOf('before', 9), valueOf('of', 10), valueOf('after', 11)];
    };
    expect(feastOn(6)).toEqual([0, 1, 1]);
    expect(feastOn(0).map((value) => Number(value.toFixed(6)))).toEqual([0.857143, 0.142857, 0.142857]);
  });

  it('are damped after the origin', () => {
    const panel = buildLinePanel(generateLine({ items: 1, weeks: 30, horizon: 6 }));
    const values = buildTrend(panel, panel.pastWeeks - 1).values[0]!;
    const step = (t: number): number => values[t]! - values[t - 1]!;
    expect(step(31) / step(30)).toBeCloseTo(0.9, 10);
    expect(step(20)).toBeCloseTo(step(10), 12);
  });
});

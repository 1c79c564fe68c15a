import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { chooseOrigins, groupByLine, hideAfterOrigin, runBacktest } from '../../../server/forecasting/backtest.ts';
import { summariseAccuracy } from '../../../server/forecasting/backtest-summary.ts';
import {
  CanonicalFileError,
  readCanonicalCalendar,
  readCanonicalSales,
} from '../../../server/forecasting/canonical-sales.ts';
import { forecastLine } from '../../../server/forecasting/forecast-line.ts';
import { createRandom } from '../../../server/forecasting/ranges/random.ts';

const chainFile = readFileSync(new URL('../../reference/oj/benchmark/oj_chain.csv', import.meta.url), 'utf8');
const chainRows = readCanonicalSales(chainFile);
const ORIGIN = '1992-04-09';

describe('back-test', () => {
  it('forecasts the same when everything unreadable after the origin is scrambled', () => {
    const random = createRandom(5);
    const scrambled = chainRows.map((row) =>
      row.sold.weekStart <= ORIGIN
        ? row
        : {
            ...row,
            sold: {
              ...row.sold,
              units: Math.round(1e6 * random()),
              price: 100 * random(),
              gap: random(),
              daysOpen: Math.floor(7 * random()),
            },
          },
    );
    const forecastOf = (rows: typeof chainRows): unknown =>
      forecastLine(hideAfterOrigin(groupByLine(rows)[0]!, [], ORIGIN, 8));
    expect(forecastOf(scrambled)).toEqual(forecastOf(chainRows));
  }, 60_000);

  it('does read the prices that a plan would hold', () => {
    const dearer = chainRows.map((row) =>
      row.sold.weekStart <= ORIGIN || row.item !== 'B01' ? row : { ...row, statedPrice: row.statedPrice * 1.1 },
    );
    const unitsOf = (rows: typeof chainRows): number =>
      forecastLine(hideAfterOrigin(groupByLine(rows)[0]!, [], ORIGIN, 8)).series.find((one) => one.item === 'B01')!
        .mean[0]!;
    expect(unitsOf(dearer)).toBeLessThan(unitsOf(chainRows));
  }, 60_000);

  it('gives the benchmarks that R gives on the same rows', () => {
    // results-of-R.csv, oj_chain, horizons 1-8: naive, snaive52, ma8.
    const origins = '1991-12-19,1992-01-16,1992-02-13,1992-03-12,1992-04-09,1992-05-07,1992-06-04,1992-07-02'.split(
      ',',
    );
    const { cells } = runBacktest(
      groupByLine(chainRows),
      [],
      origins,
      8,
      () => 0,
      () => {},
      (input) => forecastLine({ ...input, series: input.series.map((one) => ({ ...one, sold: one.sold.slice(-3) })) }),
    );
    const summary = summariseAccuracy(cells);
    expect(summary.rows).toBe(704);
    expect(summary.naiveWape).toBeCloseTo(0.92966, 5);
    expect(summary.seasonalNaiveWape).toBeCloseTo(0.97233, 5);
    expect(summary.eightWeekMeanWape).toBeCloseTo(0.80298, 5);
  });

  it('takes the last origins that leave a whole horizon', () => {
    const [first, second] = chooseOrigins(chainRows, '2', 8) as [string, string];
    const weeks = [...new Set(chainRows.map((row) => row.sold.weekStart))].sort();
    expect(weeks.at(-9)).toBe(second);
    expect(weeks.at(-13)).toBe(first);
  });
});

describe('named origins', () => {
  it('may be ISO weeks or any date of the week', () => {
    // 1992-04-09 is a Thursday; the fourth day of its week, Sunday 12 April, lies in ISO week 15.
    expect(chooseOrigins(chainRows, '1992-W15, 1992-04-11', 8)).toEqual([ORIGIN, ORIGIN]);
  });

  it('are refused outside the sales or if they are no week', () => {
    expect(() => chooseOrigins(chainRows, '2001-W10', 8)).toThrow('outside the sales');
    expect(() => chooseOrigins(chainRows, 'spring', 8)).toThrow(CanonicalFileError);
  });
});

describe('canonical calendar', () => {
  it('lays its ISO weeks on the sales’ first weekday and its depth over the plan', () => {
    const calendar = readCanonicalCalendar('week,line,item,location,depth,feature\n1992-W16,OJ,B01,All,0.25,1\n', 4);
    expect(calendar[0]!.planned).toMatchObject({ weekStart: '1992-04-16', depth: 0.25, feature: 1 });
    const input = hideAfterOrigin(groupByLine(chainRows)[0]!, calendar, ORIGIN, 8);
    const week = input.series.find((one) => one.item === 'B01')!.planned.find((one) => one.weekStart === '1992-04-16')!;
    expect(week).toMatchObject({ depth: 0.25, feature: 1 });
  });
});

describe('canonical sales file', () => {
  it('reads ISO weeks, defaults and mechanics', () => {
    const [row] = readCanonicalSales('week,item,units,net_value,promo_coupon\n2024-W02,a,10,25,0.5\n');
    expect(row).toMatchObject({
      line: 'All',
      location: 'All',
      sold: { weekStart: '2024-01-08', units: 10, price: 2.5, mechanics: { coupon: 0.5 }, daysOpen: 7, gap: 0 },
    });
    expect(row!.statedPrice).toBeNaN();
  });

  it('names the row that it cannot read', () => {
    expect(() => readCanonicalSales('week,item,units\n2024-W02,a,ten\n')).toThrow('row 2: units "ten" is not a number');
    expect(() => readCanonicalSales('week,item\n2024-W02,a\n')).toThrow(CanonicalFileError);
  });
});

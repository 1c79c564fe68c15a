import { expect, it } from 'vitest';
import type { BacktestCell } from '../../../server/forecasting/backtest.ts';
import { breakDownAccuracy } from '../../../server/forecasting/backtest-breakdown.ts';

const cellAt = (line: string, horizon: number, actual: number, p50: number, mean: number): BacktestCell => ({
  line,
  item: 'A',
  location: 'All',
  origin: '2026-11-02',
  horizon,
  week: '2026-11-09',
  actual,
  mean,
  p2_5: p50 - 20,
  p10: p50 - 10,
  p50,
  p90: p50 + 10,
  p97_5: p50 + 20,
  isPromoted: false,
  naive: 0,
  seasonalNaive: 0,
  eightWeekMean: 0,
});

it('scores each line in each band of horizons by its own rows', () => {
  const rows = breakDownAccuracy([
    cellAt('Tea', 6, 100, 100, 110),
    cellAt('Coffee', 1, 100, 115, 120),
    cellAt('Coffee', 2, 100, 95, 100),
    cellAt('Coffee', 14, 50, 80, 40),
  ]);
  expect(rows).toEqual([
    { line: 'Coffee', weeksAhead: '1–2', rows: 2, wape: 0.1, biasOfMean: 0.1, coverage80: 0.5, coverage95: 1 },
    { line: 'Coffee', weeksAhead: '14+', rows: 1, wape: 0.6, biasOfMean: -0.2, coverage80: 0, coverage95: 0 },
    { line: 'Tea', weeksAhead: '5–8', rows: 1, wape: 0, biasOfMean: 0.1, coverage80: 1, coverage95: 1 },
  ]);
});

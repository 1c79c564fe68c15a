import type { BacktestCell } from './backtest.ts';

export interface AccuracySummary {
  rows: number;
  /** Σ|y − p50| ÷ Σy. */
  wape: number;
  /** Σ(mean − y) ÷ Σy over all, promoted and other weeks. */
  biasOfMean: number;
  biasPromoted: number;
  biasOther: number;
  biasOfMedian: number;
  coverage80: number;
  coverage95: number;
  /** Interval score (Gneiting & Raftery 2007) ÷ mean units. */
  intervalScore80: number;
  intervalScore95: number;
  naiveWape: number;
  seasonalNaiveWape: number;
  eightWeekMeanWape: number;
}

/** Scores of the cells; NaN where there are none of a kind. */
export function summariseAccuracy(cells: readonly BacktestCell[]): AccuracySummary {
  const units = sumOf(cells, (cell) => cell.actual);
  const wapeOf = (forecast: (cell: BacktestCell) => number): number =>
    sumOf(cells, (cell) => Math.abs(forecast(cell) - cell.actual)) / units;
  const biasOf = (chosen: readonly BacktestCell[], forecast: (cell: BacktestCell) => number): number =>
    sumOf(chosen, (cell) => forecast(cell) - cell.actual) / sumOf(chosen, (cell) => cell.actual);
  const mean = (cell: BacktestCell): number => cell.mean;
  return {
    rows: cells.length,
    wape: wapeOf((cell) => cell.p50),
    biasOfMean: biasOf(cells, mean),
    biasPromoted: biasOf(
      cells.filter((cell) => cell.isPromoted),
      mean,
    ),
    biasOther: biasOf(
      cells.filter((cell) => !cell.isPromoted),
      mean,
    ),
    biasOfMedian: biasOf(cells, (cell) => cell.p50),
    coverage80: sumOf(cells, (cell) => Number(cell.actual >= cell.p10 && cell.actual <= cell.p90)) / cells.length,
    coverage95: sumOf(cells, (cell) => Number(cell.actual >= cell.p2_5 && cell.actual <= cell.p97_5)) / cells.length,
    intervalScore80: sumOf(cells, (cell) => intervalScore(cell.actual, cell.p10, cell.p90, 0.2)) / units,
    intervalScore95: sumOf(cells, (cell) => intervalScore(cell.actual, cell.p2_5, cell.p97_5, 0.05)) / units,
    naiveWape: wapeOf((cell) => cell.naive),
    seasonalNaiveWape: wapeOf((cell) => cell.seasonalNaive),
    eightWeekMeanWape: wapeOf((cell) => cell.eightWeekMean),
  };
}

/** Width plus 2/α times the distance by which the actual lies outside (Gneiting & Raftery 2007, eq. 43). */
export function intervalScore(actual: number, low: number, high: number, alpha: number): number {
  return high - low + (2 / alpha) * (Math.max(0, low - actual) + Math.max(0, actual - high));
}

function sumOf(cells: readonly BacktestCell[], valueOf: (cell: BacktestCell) => number): number {
  return cells.reduce((sum, cell) => sum + valueOf(cell), 0);
}

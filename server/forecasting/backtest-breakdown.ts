import { from, op } from 'arquero';
import type { BacktestCell } from './backtest.ts';

/** Accuracy of one line in one band of horizons. */
export interface AccuracyRow {
  line: string;
  weeksAhead: string;
  rows: number;
  /** Σ|y − p50| ÷ Σy. */
  wape: number;
  /** Σ(mean − y) ÷ Σy. */
  biasOfMean: number;
  coverage80: number;
  coverage95: number;
}

/** Bands of horizons, weeks, as the ranges are scaled in. */
const bands: readonly [last: number, name: string][] = [
  [2, '1–2'],
  [4, '3–4'],
  [8, '5–8'],
  [13, '9–13'],
  [Infinity, '14+'],
];

/** Scores by line and band of horizons, in the order of lines and weeks. */
export function breakDownAccuracy(cells: readonly BacktestCell[]): AccuracyRow[] {
  const frame = from(
    cells.map((cell) => ({
      line: cell.line,
      band: bands.findIndex(([last]) => cell.horizon <= last),
      actual: cell.actual,
      missed: Math.abs(cell.p50 - cell.actual),
      over: cell.mean - cell.actual,
      in80: Number(cell.actual >= cell.p10 && cell.actual <= cell.p90),
      in95: Number(cell.actual >= cell.p2_5 && cell.actual <= cell.p97_5),
    })),
  );
  return frame
    .groupby('line', 'band')
    .rollup({
      rows: op.count(),
      units: op.sum('actual'),
      missed: op.sum('missed'),
      over: op.sum('over'),
      in80: op.mean('in80'),
      in95: op.mean('in95'),
    })
    .orderby('line', 'band')
    .objects()
    .map((row) => {
      const { line, band, rows, units, missed, over, in80, in95 } = row as Record<string, number> & { line: string };
      return {
        line,
        weeksAhead: bands[band ?? 0]?.[1] ?? '',
        rows: rows ?? 0,
        wape: (missed ?? 0) / (units ?? 0),
        biasOfMean: (over ?? 0) / (units ?? 0),
        coverage80: in80 ?? 0,
        coverage95: in95 ?? 0,
      };
    });
}

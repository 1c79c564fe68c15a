import type { LinePanel } from '../features/line-panel.ts';

/** Rows that the line's factor counts for beside that of promoted or other weeks. */
const PRIOR_ROWS = 50;

/** Factors from median to mean. */
export interface SmearingFactors {
  promoted: number;
  other: number;
}

/**
 * Smearing factors (Duan 1983) on leave-one-out residuals: the mean of exp(residual), apart for promoted and other weeks, each drawn
 * to that of all weeks. residuals: per series and week, NaN where unknown.
 */
export function computeSmearing(panel: LinePanel, residuals: readonly Float64Array[]): SmearingFactors {
  const sums = [0, 0];
  const rows = [0, 0];
  panel.series.forEach((series, s) => {
    for (let t = 0; t < panel.pastWeeks; t++) {
      const residual = residuals[s]![t]!;
      if (Number.isNaN(residual)) continue;
      const kind = series.isPromoted[t]!;
      sums[kind]! += Math.exp(residual);
      rows[kind]!++;
    }
  });
  const all = rows[0]! + rows[1]! > 0 ? (sums[0]! + sums[1]!) / (rows[0]! + rows[1]!) : 1;
  return {
    other: (sums[0]! + PRIOR_ROWS * all) / (rows[0]! + PRIOR_ROWS),
    promoted: (sums[1]! + PRIOR_ROWS * all) / (rows[1]! + PRIOR_ROWS),
  };
}

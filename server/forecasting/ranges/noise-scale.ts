import type { LinePanel } from '../features/line-panel.ts';

/** Rows that a wider group counts for beside a narrower one. */
const PRIOR_ROWS = 10;

/** Standard deviation of each series' residuals, for other weeks (0) and promoted ones (1), ln units. */
export type NoiseScales = readonly [other: Float64Array, promoted: Float64Array];

/**
 * Spread of the residuals per series, apart for promoted and other weeks: a series' variance is drawn to the line's, and its variance
 * in promoted weeks to its own times what promotion does to the variance in the whole line.
 * residuals: per series and week, NaN where unknown.
 */
export function estimateNoiseScales(panel: LinePanel, residuals: readonly Float64Array[]): NoiseScales {
  const squares = [0, 1].map(() => new Float64Array(panel.series.length));
  const rows = [0, 1].map(() => new Float64Array(panel.series.length));
  panel.series.forEach((series, s) => {
    for (let t = 0; t < panel.pastWeeks; t++) {
      const residual = residuals[s]![t]!;
      if (Number.isNaN(residual)) continue;
      const kind = series.isPromoted[t]!;
      squares[kind]![s]! += residual * residual;
      rows[kind]![s]!++;
    }
  });
  const sum = (values: Float64Array): number => values.reduce((total, value) => total + value, 0);
  const lineVariance = Math.max(
    (sum(squares[0]!) + sum(squares[1]!)) / Math.max(1, sum(rows[0]!) + sum(rows[1]!)),
    1e-4,
  );
  const variances = panel.series.map(
    (_, s) =>
      (squares[0]![s]! + squares[1]![s]! + PRIOR_ROWS * lineVariance) / (rows[0]![s]! + rows[1]![s]! + PRIOR_ROWS),
  );
  const scaleOf = (kind: 0 | 1): Float64Array => {
    let standardised = PRIOR_ROWS;
    let count = PRIOR_ROWS;
    panel.series.forEach((_, s) => {
      standardised += squares[kind]![s]! / variances[s]!;
      count += rows[kind]![s]!;
    });
    const ratio = standardised / count;
    return Float64Array.from(variances, (variance, s) =>
      Math.sqrt((squares[kind]![s]! + PRIOR_ROWS * ratio * variance) / (rows[kind]![s]! + PRIOR_ROWS)),
    );
  };
  return [scaleOf(0), scaleOf(1)];
}

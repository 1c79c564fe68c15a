import type { Column } from '../features/column.ts';
import type { LinePanel } from '../features/line-panel.ts';

/** Weighted moments of one series about its own means: what least squares with an absorbed intercept needs of it. */
export interface SeriesMoments {
  rows: number;
  /** Σw. */
  weight: number;
  targetMean: number;
  /** Weighted mean per column. */
  columnMeans: Float64Array;
  /** Σw·(x−x̄)(x−x̄)ᵀ, columns × columns, lower triangle filled. */
  cross: Float64Array;
  /** Σw·(x−x̄)(y−ȳ). */
  withTarget: Float64Array;
  /** Σw·(y−ȳ)². */
  targetSquares: number;
}

/**
 * Moments of every series over its used weeks up to and including week index `lastWeek`.
 * target, rowWeights: per series, per week of the axis.
 */
export function computeSeriesMoments(
  panel: LinePanel,
  columns: readonly Column[],
  target: readonly Float64Array[],
  rowWeights: readonly Float64Array[],
  lastWeek: number,
): SeriesMoments[] {
  const count = columns.length;
  const x = new Float64Array(count);
  return panel.series.map((series, s) => {
    const values = columns.map((column) => column.values[s]!);
    const y = target[s]!;
    const weights = rowWeights[s]!;
    const moments: SeriesMoments = {
      rows: 0,
      weight: 0,
      targetMean: 0,
      columnMeans: new Float64Array(count),
      cross: new Float64Array(count * count),
      withTarget: new Float64Array(count),
      targetSquares: 0,
    };
    const { columnMeans, cross, withTarget } = moments;
    for (let t = 0; t <= lastWeek; t++) {
      const w = weights[t]!;
      if (!series.isUsed[t] || !(w > 0)) continue;
      moments.rows++;
      moments.weight += w;
      moments.targetMean += w * y[t]!;
      for (let k = 0; k < count; k++) columnMeans[k]! += w * values[k]![t]!;
    }
    if (moments.rows === 0) return moments;
    moments.targetMean /= moments.weight;
    for (let k = 0; k < count; k++) columnMeans[k]! /= moments.weight;
    for (let t = 0; t <= lastWeek; t++) {
      const w = weights[t]!;
      if (!series.isUsed[t] || !(w > 0)) continue;
      const dy = y[t]! - moments.targetMean;
      moments.targetSquares += w * dy * dy;
      for (let k = 0; k < count; k++) {
        const xk = values[k]![t]! - columnMeans[k]!;
        x[k] = xk;
        if (xk === 0) continue;
        const wx = w * xk;
        withTarget[k]! += wx * dy;
        const row = k * count;
        for (let l = 0; l <= k; l++) cross[row + l]! += wx * x[l]!;
      }
    }
    return moments;
  });
}

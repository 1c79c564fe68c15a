import { solveCholesky } from '../fit/cholesky.ts';
import type { KeptFit } from '../fit/kept-fit.ts';
import type { LineEstimate } from '../fit/line-estimate.ts';

/**
 * A⁻¹·g(t) per week with scores, where g(t) is the sum of the week's score rows: the pieces of the covariance clustered by week,
 * V = c·Σ A⁻¹g·gᵀA⁻¹ (Liang & Zeger 1986). A week's shock hits all series, so weeks and not rows are the independent cases.
 * Scores take leave-one-out residuals, the clustered counterpart of HC3. Each array has the layout's size.
 */
export function computeWeekInfluences(estimate: LineEstimate, kept: KeptFit): Float64Array[] {
  const { size } = estimate.layout;
  const byWeek = new Map<number, Float64Array>();
  const width = kept.open.length;
  kept.rows.forEach(({ week }, i) => {
    const score = byWeek.get(week) ?? new Float64Array(size);
    byWeek.set(week, score);
    const weighted = kept.weights[i]! * kept.leaveOneOut[i]!;
    for (let j = 0; j < width; j++) score[kept.open[j]!]! += weighted * kept.design[i * width + j]!;
  });
  const influences = [...byWeek.values()];
  for (const score of influences) solveCholesky(estimate.solution.factor, size, score);
  const correction = Math.sqrt(influences.length / Math.max(1, influences.length - 1));
  return influences.map((score) => score.map((value) => value * correction));
}

/** Deviations of the coefficients from their estimate with the covariance clustered by week: Σ ξ(t)·influence(t), ξ standard normal. */
export function drawCoefficientDeviations(
  influences: readonly Float64Array[],
  size: number,
  drawNormal: () => number,
): Float64Array {
  const deviation = new Float64Array(size);
  for (const influence of influences) {
    const xi = drawNormal();
    for (let p = 0; p < size; p++) deviation[p]! += xi * influence[p]!;
  }
  return deviation;
}

import type { LinePanel } from '../features/line-panel.ts';

/** How a series' recent residuals are carried forward. */
export interface CarryRule {
  /** Weeks after which a residual counts half. */
  halfLifeWeeks: number;
  /** Weeks of evidence that 0 counts for. */
  priorWeeks: number;
  /** Share of the carried level that is left after each further week. */
  decayPerWeek: number;
}

/** Recent level of each series in ln units, over all weeks and for promoted weeks. */
export interface RecentLevels {
  other: Float64Array;
  promoted: Float64Array;
}

/**
 * Exponentially weighted mean of each series' residuals up to `lastWeek`, drawn to 0 by the weight of `priorWeeks` average weeks;
 * the mean over promoted (other) weeks is drawn to the mean over all by the same weight.
 * residuals: per series and week, NaN where unused.
 */
export function computeRecentLevels(
  panel: LinePanel,
  residuals: readonly Float64Array[],
  lastWeek: number,
  rule: CarryRule,
): RecentLevels {
  const other = new Float64Array(panel.series.length);
  const promoted = new Float64Array(panel.series.length);
  const fade = 0.5 ** (1 / rule.halfLifeWeeks);
  panel.series.forEach((series, s) => {
    const sums = [0, 0];
    const weights = [0, 0];
    let weight = 1;
    for (let t = lastWeek; t >= 0 && weight > 1e-3; t--, weight *= fade) {
      const residual = residuals[s]![t]!;
      if (Number.isNaN(residual)) continue;
      const kind = series.isPromoted[t]!;
      sums[kind]! += weight * residual;
      weights[kind]! += weight;
    }
    const all = (sums[0]! + sums[1]!) / (weights[0]! + weights[1]! + rule.priorWeeks);
    other[s] = (sums[0]! + rule.priorWeeks * all) / (weights[0]! + rule.priorWeeks);
    promoted[s] = (sums[1]! + rule.priorWeeks * all) / (weights[1]! + rule.priorWeeks);
  });
  return { other, promoted };
}

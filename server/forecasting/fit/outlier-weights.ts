import type { LinePanel } from '../features/line-panel.ts';
import { linearPart } from './line-estimate.ts';
import type { LineModel } from './line-model.ts';

/** Residuals beyond this many robust standard deviations count by their excess only. */
const BOUND = 3;
/** Standard deviation of a normal distribution over its median absolute deviation. */
const NORMAL_OVER_MAD = 1.4826;
/** Weeks that the line's spread counts for beside a series' own. */
const PRIOR_WEEKS = 8;

/**
 * Huber's (1964) weights min(1, bound ÷ |z|) per series and week, z = residual ÷ a spread taken from the median absolute residual, which an
 * outlier can't inflate. A promoted week that sold more than expected keeps weight 1: promotion peaks are what a forecast is for.
 */
export function weighOutliers(panel: LinePanel, model: LineModel): Float64Array[] {
  const lastWeek = panel.pastWeeks - 1;
  const residuals = panel.series.map((series, s) => {
    const values = new Float64Array(panel.weeks.length).fill(Number.NaN);
    for (let t = 0; t <= lastWeek; t++) {
      if (!series.isUsed[t] || series.units[t] === 0) continue;
      const linear = model.estimate.levels[s]! + linearPart(model.columns, model.estimate.slopes[s]!, s, t);
      values[t] = Math.log(series.units[t]!) - series.offset[t]! - linear;
    }
    return values;
  });
  const lineSpread = spreadOf(residuals.flatMap((values) => [...values]));
  return panel.series.map((series, s) => {
    const own = residuals[s]!.filter((value) => !Number.isNaN(value));
    const spread = (own.length * spreadOf([...own]) + PRIOR_WEEKS * lineSpread) / (own.length + PRIOR_WEEKS);
    return residuals[s]!.map((residual, t) => {
      const isPeak = residual > 0 && series.isPromoted[t];
      return Number.isNaN(residual) || isPeak || spread === 0 ? 1 : Math.min(1, (BOUND * spread) / Math.abs(residual));
    });
  });
}

function spreadOf(values: readonly number[]): number {
  const sizes = Float64Array.from(
    values.filter((value) => !Number.isNaN(value)),
    Math.abs,
  ).sort();
  return sizes.length > 0 ? NORMAL_OVER_MAD * sizes[sizes.length >> 1]! : 0;
}

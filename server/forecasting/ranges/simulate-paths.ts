import type { Column } from '../features/column.ts';
import type { LinePanel } from '../features/line-panel.ts';
import type { LineModel } from '../fit/line-model.ts';
import { slopesBySeries } from '../fit/shrunken-slopes.ts';
import { drawCoefficientDeviations } from './coefficient-draws.ts';
import { stretchDeviation, type DeviationQuantiles, type PathScaling } from './conformal.ts';
import type { NoiseScales } from './noise-scale.ts';
import type { UnitPaths } from './path-quantiles.ts';
import { createNormal, createRandom } from './random.ts';
import { drawResidualPaths } from './residual-paths.ts';

export interface PathInput {
  model: LineModel;
  /** The kept fit's columns over the plan. */
  columns: readonly Column[];
  /** ln forecast per series over the horizon; undefined for a series without a regression. */
  linear: readonly (Float64Array | undefined)[];
  /** Leave-one-out residuals ÷ their scale, per series and week. */
  standardised: readonly Float64Array[];
  scales: NoiseScales;
  influences: readonly Float64Array[];
  scaling: PathScaling;
  quantiles: readonly [DeviationQuantiles, DeviationQuantiles];
  seed: number;
}

/**
 * Joint paths: ln forecast + residuals of whole weeks (standardised where they were seen, scaled to the kind of week they're drawn for) +
 * coefficient draws, the sum stretched to the rolling coverage. Fills the paths of the series that have a forecast.
 */
export function simulatePaths(panel: LinePanel, input: PathInput, { values, paths }: UnitPaths): void {
  const { model, columns, linear, scales, influences, scaling, quantiles, seed } = input;
  const { layout, moments } = model.estimate;
  const { horizon, pastWeeks } = panel;
  const count = panel.series.length;
  const drawn = drawResidualPaths(panel, input.standardised, paths, seed);
  const drawNormal = createNormal(createRandom(seed + 1));
  const spreads = panel.series.map((series, s) =>
    Float64Array.from({ length: horizon }, (_, h) => {
      const t = pastWeeks + h;
      const noise = scales[series.isPromoted[t] as 0 | 1][s]!;
      return Math.sqrt(noise ** 2 + coefficientVariance(model, columns, influences, panel, s, t));
    }),
  );
  for (let path = 0; path < paths; path++) {
    const slopes = slopesBySeries(panel, layout, drawCoefficientDeviations(influences, layout.size, drawNormal));
    for (let s = 0; s < count; s++) {
      const centre = linear[s];
      if (!centre) continue;
      const own = slopes[s]!;
      const { columnMeans } = moments[s]!;
      const { isPromoted } = panel.series[s]!;
      for (let h = 0; h < horizon; h++) {
        const at = (path * count + s) * horizon + h;
        const kind = isPromoted[pastWeeks + h] as 0 | 1;
        let deviation = drawn[at]! * scales[kind][s]!;
        for (let k = 0; k < own.length; k++) {
          deviation += own[k]! * (columns[k]!.values[s]![pastWeeks + h]! - columnMeans[k]!);
        }
        const spread = spreads[s]![h]!;
        const factors = scaling(h + 1, kind);
        if (factors) deviation = spread * stretchDeviation(deviation / spread, factors, quantiles[kind]);
        values[at] = Math.exp(centre[h]! + deviation);
      }
    }
  }
}

/** Variance of x′b in week t from the covariance clustered by week; x centred at the series' means. */
export function coefficientVariance(
  model: LineModel,
  columns: readonly Column[],
  influences: readonly Float64Array[],
  panel: LinePanel,
  s: number,
  t: number,
): number {
  const { layout, moments } = model.estimate;
  const { columnMeans } = moments[s]!;
  const { item, location } = panel.series[s]!;
  const count = columns.length;
  let variance = 0;
  for (const influence of influences) {
    let sum = 0;
    for (let k = 0; k < count; k++) {
      const x = columns[k]!.values[s]![t]! - columnMeans[k]!;
      if (x === 0) continue;
      const itemAt = layout.itemAt[item * count + k]!;
      const locationAt = layout.locationAt[location * count + k]!;
      sum +=
        x * (influence[k]! + (itemAt >= 0 ? influence[itemAt]! : 0) + (locationAt >= 0 ? influence[locationAt]! : 0));
    }
    variance += sum * sum;
  }
  return variance;
}

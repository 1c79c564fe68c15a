import type { LinePanel } from '../features/line-panel.ts';
import { quantileOfSorted } from './quantile.ts';

/** Joint paths in units: paths × series × horizon, flat. */
export interface UnitPaths {
  values: Float64Array;
  paths: number;
}

export interface RangeArrays {
  p2_5: Float64Array;
  p10: Float64Array;
  p50: Float64Array;
  p90: Float64Array;
  p97_5: Float64Array;
}

/** Quantiles per week of the sum of the given series over the joint paths. */
export function summarisePaths(
  panel: LinePanel,
  { values, paths }: UnitPaths,
  members: readonly number[],
): RangeArrays {
  const { horizon } = panel;
  const count = panel.series.length;
  const empty = (): Float64Array => new Float64Array(horizon);
  const ranges: RangeArrays = { p2_5: empty(), p10: empty(), p50: empty(), p90: empty(), p97_5: empty() };
  const sums = new Float64Array(paths);
  for (let h = 0; h < horizon; h++) {
    for (let path = 0; path < paths; path++) {
      let sum = 0;
      for (const s of members) sum += values[(path * count + s) * horizon + h]!;
      sums[path] = sum;
    }
    sums.sort();
    ranges.p2_5[h] = quantileOfSorted(sums, 0.025);
    ranges.p10[h] = quantileOfSorted(sums, 0.1);
    ranges.p50[h] = quantileOfSorted(sums, 0.5);
    ranges.p90[h] = quantileOfSorted(sums, 0.9);
    ranges.p97_5[h] = quantileOfSorted(sums, 0.975);
  }
  return ranges;
}

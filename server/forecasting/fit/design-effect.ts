import type { LinePanel } from '../features/line-panel.ts';

/**
 * Design effect 1 + (m − 1)·ρ of clusters (Kish 1965): how many times less evidence the rows hold than if they were independent.
 * clusterOf gives the cluster of series s within a week; m is the average number of rows per cluster and ρ the correlation within,
 * never below 0. residuals: standardised, per series and week; NaN where unused.
 */
export function computeDesignEffect(
  panel: LinePanel,
  residuals: readonly Float64Array[],
  clusterCount: number,
  clusterOf: (s: number) => number,
): number {
  let products = 0;
  let pairs = 0;
  let squares = 0;
  let rows = 0;
  let clusters = 0;
  const sum = new Float64Array(clusterCount);
  const square = new Float64Array(clusterCount);
  const members = new Float64Array(clusterCount);
  for (let t = 0; t < panel.pastWeeks; t++) {
    sum.fill(0);
    square.fill(0);
    members.fill(0);
    for (let s = 0; s < panel.series.length; s++) {
      const residual = residuals[s]![t]!;
      if (Number.isNaN(residual)) continue;
      const g = clusterOf(s);
      sum[g]! += residual;
      square[g]! += residual * residual;
      members[g]!++;
    }
    for (let g = 0; g < clusterCount; g++) {
      const m = members[g]!;
      if (m === 0) continue;
      clusters++;
      rows += m;
      squares += square[g]!;
      products += sum[g]! ** 2 - square[g]!;
      pairs += m * (m - 1);
    }
  }
  if (pairs === 0 || squares === 0) return 1;
  const correlation = Math.max(0, products / pairs / (squares / rows));
  return 1 + (rows / clusters - 1) * correlation;
}

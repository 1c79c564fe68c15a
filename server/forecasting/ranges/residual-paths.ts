import type { LinePanel } from '../features/line-panel.ts';
import { createRandom } from './random.ts';

/** Weeks that stay together when residual weeks are drawn, so that a shock that lasts does so in the paths. */
const BLOCK_WEEKS = 4;

/**
 * Residuals of whole weeks drawn in blocks, so that series of one week stay correlated: paths × series × horizon, flat.
 * residuals: per series and week of the past, NaN where unknown; a series without a residual in the drawn week takes one of its own
 * at random, a series without any takes 0.
 */
export function drawResidualPaths(
  panel: LinePanel,
  residuals: readonly Float64Array[],
  paths: number,
  seed: number,
): Float64Array {
  const random = createRandom(seed);
  const { horizon, pastWeeks } = panel;
  const count = panel.series.length;
  const pools = residuals.map((values) => values.filter((value) => !Number.isNaN(value)));
  const weeksWithResiduals: number[] = [];
  for (let t = 0; t < pastWeeks; t++) {
    if (residuals.some((values) => !Number.isNaN(values[t]!))) weeksWithResiduals.push(t);
  }
  const drawn = new Float64Array(paths * count * horizon);
  if (weeksWithResiduals.length === 0) return drawn;
  for (let path = 0; path < paths; path++) {
    let at = 0;
    for (let h = 0; h < horizon; h++) {
      at =
        h % BLOCK_WEEKS === 0 ? Math.floor(random() * weeksWithResiduals.length) : (at + 1) % weeksWithResiduals.length;
      const t = weeksWithResiduals[at]!;
      for (let s = 0; s < count; s++) {
        let residual = residuals[s]![t]!;
        if (Number.isNaN(residual)) {
          const pool = pools[s]!;
          residual = pool.length > 0 ? pool[Math.floor(random() * pool.length)]! : 0;
        }
        drawn[(path * count + s) * horizon + h] = residual;
      }
    }
  }
  return drawn;
}

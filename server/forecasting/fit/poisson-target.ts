import type { LinePanel } from '../features/line-panel.ts';
import type { FitTarget } from './line-estimate.ts';

const LARGEST_DISPERSION = 4;
const SMALLEST_MEAN = 1e-3;

/**
 * Working response and weights of one round of iteratively reweighted least squares for a Poisson pseudo-likelihood with log link
 * (Santos Silva & Tenreyro 2006; McCullagh & Nelder 1989, §2.5). The weights are μ/(1 + κ·μ) with κ estimated from the residuals:
 * sales of large items vary by a share of themselves, and with plain Poisson weights the promotion peaks alone would decide.
 * linear: ln of the current means per series and week, without the offset for part weeks; null for the first round.
 */
export function buildPoissonTarget(
  panel: LinePanel,
  halfLifeWeeks: number,
  linear: readonly Float64Array[] | null,
): FitTarget {
  const means = panel.series.map((series, s) =>
    series.units.map((units, t) =>
      linear ? Math.max(SMALLEST_MEAN, Math.exp(linear[s]![t]! + series.offset[t]!)) : units + 0.5,
    ),
  );
  const dispersion = linear ? estimateDispersion(panel, means) : 0;
  return {
    target: panel.series.map((series, s) =>
      series.units.map((units, t) => {
        const mean = means[s]![t]!;
        return Math.log(mean) - series.offset[t]! + (units - mean) / mean;
      }),
    ),
    rowWeights: panel.series.map((series, s) =>
      series.units.map((_, t) => {
        if (!series.isUsed[t]) return 0;
        const fade = Number.isFinite(halfLifeWeeks) ? 0.5 ** ((panel.pastWeeks - 1 - t) / halfLifeWeeks) : 1;
        const mean = means[s]![t]!;
        return (fade * mean) / (1 + dispersion * mean);
      }),
    ),
  };
}

/** κ of the variance μ + κ·μ², by moments. */
function estimateDispersion(panel: LinePanel, means: readonly Float64Array[]): number {
  let excess = 0;
  let rows = 0;
  panel.series.forEach((series, s) => {
    for (let t = 0; t < panel.pastWeeks; t++) {
      if (!series.isUsed[t]) continue;
      const mean = means[s]![t]!;
      const weight = Math.min(1, mean);
      excess += (weight * ((series.units[t]! - mean) ** 2 - mean)) / mean ** 2;
      rows += weight;
    }
  });
  return rows > 0 ? Math.min(LARGEST_DISPERSION, Math.max(0, excess / rows)) : 0;
}

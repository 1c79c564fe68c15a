import type { LinePanel, PanelSeries } from '../features/line-panel.ts';

const WEEKS = 13;
/** Noise in ln units that is taken for granted, and the number of weeks it counts for. */
const PRIOR_SPREAD = 0.6;
const PRIOR_WEEKS = 4;

/** Mean of the last 13 used weeks and the spread of ln units about it; 0 where nothing was ever sold. */
export function averageRecentWeeks(panel: LinePanel, series: PanelSeries): { mean: number; spread: number } {
  const recent: number[] = [];
  for (let t = panel.pastWeeks - 1; t >= 0 && recent.length < WEEKS; t--) {
    if (series.isUsed[t]) recent.push(series.units[t]! / Math.exp(series.offset[t]!));
  }
  if (recent.length === 0) return { mean: 0, spread: PRIOR_SPREAD };
  const mean = recent.reduce((sum, value) => sum + value, 0) / recent.length;
  if (mean === 0) return { mean, spread: PRIOR_SPREAD };
  const squares = recent.reduce((sum, value) => sum + Math.log((value + 0.5) / (mean + 0.5)) ** 2, 0);
  return { mean, spread: Math.sqrt((squares + PRIOR_WEEKS * PRIOR_SPREAD ** 2) / (recent.length + PRIOR_WEEKS)) };
}

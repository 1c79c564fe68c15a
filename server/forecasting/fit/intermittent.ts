import type { LinePanel, PanelSeries } from '../features/line-panel.ts';

/** Mean interval between sales above which a series is intermittent (Syntetos, Boylan & Croston 2005). */
const LONGEST_MEAN_INTERVAL = 1.32;
const SMOOTHING = 0.1;

/** Whether the unpromoted listed weeks of a series sell less often than every 1.32 weeks. */
export function isIntermittent(panel: LinePanel, series: PanelSeries): boolean {
  let weeks = 0;
  let selling = 0;
  for (let t = 0; t < panel.pastWeeks; t++) {
    if (!series.isUsed[t] || series.isPromoted[t]) continue;
    weeks++;
    if (series.units[t]! > 0) selling++;
  }
  return weeks > 0 && weeks > LONGEST_MEAN_INTERVAL * selling;
}

export interface IntermittentLevel {
  /** Probability that a week sells at all, after the last week. */
  probability: number;
  /** Units of a week that sells, after the last week. */
  size: number;
  /** Units of the weeks that sold, oldest first. */
  sizes: number[];
}

/**
 * Teunter, Syntetos & Babai (2011): probability and size smoothed apart, the probability in every week, the size in selling weeks.
 * Both start from their means over the first half year.
 */
export function smoothIntermittent(panel: LinePanel, series: PanelSeries): IntermittentLevel {
  const units: number[] = [];
  for (let t = 0; t < panel.pastWeeks; t++) if (series.isUsed[t]) units.push(series.units[t]!);
  const sizes = units.filter((value) => value > 0);
  if (sizes.length === 0) return { probability: 0, size: 0, sizes };
  const start = units.slice(0, 26);
  const startSizes = start.filter((value) => value > 0);
  let probability = startSizes.length / start.length;
  let size = mean(startSizes.length > 0 ? startSizes : sizes);
  for (const value of units) {
    if (value > 0) {
      size += SMOOTHING * (value - size);
      probability += SMOOTHING * (1 - probability);
    } else {
      probability -= SMOOTHING * probability;
    }
  }
  return { probability, size, sizes };
}

function mean(values: readonly number[]): number {
  return values.reduce((sum, value) => sum + value, 0) / values.length;
}

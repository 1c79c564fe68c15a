import type { LinePanel, PanelSeries } from './line-panel.ts';

const TOLERANCE = 0.02;

/**
 * Marks per series and week of the horizon: 'outside-seen-price' where the planned price lies outside the prices paid in the series'
 * used weeks, 'outside-seen-promotion' where the cut, the feature, the display or a mechanic is larger than any of them.
 */
export function markUnseen(panel: LinePanel): string[][][] {
  return panel.series.map((series) => {
    const price = seenRange(panel, series, (t) => series.lnRegular[t]! + series.lnDepth[t]!);
    const promotions = [series.lnDepth.map((depth) => -depth), series.feature, series.display, ...series.mechanics];
    const largest = promotions.map((values) => seenRange(panel, series, (t) => values[t]!).high);
    return Array.from({ length: panel.horizon }, (_, h) => {
      const t = panel.pastWeeks + h;
      const marks: string[] = [];
      const lnPrice = series.lnRegular[t]! + series.lnDepth[t]!;
      if (lnPrice < price.low - TOLERANCE || lnPrice > price.high + TOLERANCE) marks.push('outside-seen-price');
      if (promotions.some((values, p) => values[t]! > Math.max(0, largest[p]!) + TOLERANCE)) {
        marks.push('outside-seen-promotion');
      }
      return marks;
    });
  });
}

function seenRange(
  panel: LinePanel,
  series: PanelSeries,
  valueAt: (t: number) => number,
): { low: number; high: number } {
  let low = Infinity;
  let high = -Infinity;
  for (let t = 0; t < panel.pastWeeks; t++) {
    if (!series.isUsed[t]) continue;
    low = Math.min(low, valueAt(t));
    high = Math.max(high, valueAt(t));
  }
  return { low, high };
}

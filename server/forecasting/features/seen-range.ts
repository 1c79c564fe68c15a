import { countWeeksAwayFromMedian } from '../fit/slope-layout.ts';
import type { Column } from './column.ts';
import type { LinePanel } from './line-panel.ts';

const WEEKS_FOR_OWN_RANGE = 4;

/**
 * Holds the coming weeks' columns with slopes of their own at the edge of what was seen. A series whose column moved in at least four
 * weeks is held to its own range; another one, which borrows the line's slope, to its usual value plus the moves seen anywhere in
 * the line.
 */
export function holdAtSeenRange(panel: LinePanel, columns: readonly Column[]): Column[] {
  return columns.map((column) => {
    if (!column.hasOwnSlopes) return column;
    const seen = panel.series.map((series, s) => describeSeen(column.values[s]!, series.isUsed, panel.pastWeeks));
    const lineLow = Math.min(0, ...seen.map((one) => one.low - one.median));
    const lineHigh = Math.max(0, ...seen.map((one) => one.high - one.median));
    const values = panel.series.map((_, s) => {
      const own = column.values[s]!;
      const { low, high, median, moved, rows } = seen[s]!;
      if (rows === 0) return own;
      const isOwn = moved >= WEEKS_FOR_OWN_RANGE;
      const floor = isOwn ? low : Math.min(low, median + lineLow);
      const ceiling = isOwn ? high : Math.max(high, median + lineHigh);
      return own.map((value, t) => (t < panel.pastWeeks ? value : Math.min(ceiling, Math.max(floor, value))));
    });
    return { ...column, values };
  });
}

function describeSeen(
  values: Float64Array,
  isUsed: Uint8Array,
  pastWeeks: number,
): { low: number; high: number; median: number; moved: number; rows: number } {
  const seen: number[] = [];
  for (let t = 0; t < pastWeeks; t++) if (isUsed[t]) seen.push(values[t]!);
  if (seen.length === 0) return { low: 0, high: 0, median: 0, moved: 0, rows: 0 };
  const sorted = Float64Array.from(seen).sort();
  return {
    low: sorted[0]!,
    high: sorted[sorted.length - 1]!,
    median: sorted[sorted.length >> 1]!,
    moved: countWeeksAwayFromMedian(values, isUsed, pastWeeks - 1),
    rows: seen.length,
  };
}

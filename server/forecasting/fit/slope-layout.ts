import type { Column } from '../features/column.ts';
import type { LinePanel } from '../features/line-panel.ts';

/** A price or promotion column that moved by more than this (in ln, or as a share) … */
const SMALLEST_MOVE = 0.02;
/** … in fewer than this many weeks gives an item or location no slope of its own. */
const FEWEST_MOVED_WEEKS = 4;

/** Where each coefficient stands: the line's slopes first, then the deviations that items and locations have earned. */
export interface SlopeLayout {
  columns: readonly Column[];
  size: number;
  /** items × columns and locations × columns: index of the deviation, or −1. */
  itemAt: Int32Array;
  locationAt: Int32Array;
  /** Per coefficient: its column, and its level: 0 line, 1 item, 2 location. */
  columnOf: Int32Array;
  levelOf: Uint8Array;
}

/** Lays out the coefficients of a fit on the used weeks up to `lastWeek`. */
export function layOutSlopes(panel: LinePanel, columns: readonly Column[], lastWeek: number): SlopeLayout {
  const count = columns.length;
  const columnOf: number[] = columns.map((_, k) => k);
  const levelOf: number[] = columns.map(() => 0);
  const place = (groupCount: number, groupOf: (s: number) => number, level: number): Int32Array => {
    const at = new Int32Array(groupCount * count).fill(-1);
    if (groupCount < 2) return at;
    const moved = countMovedWeeks(panel, columns, lastWeek, groupCount, groupOf);
    for (let g = 0; g < groupCount; g++) {
      for (let k = 0; k < count; k++) {
        if (!columns[k]!.hasOwnSlopes || moved[g * count + k]! < FEWEST_MOVED_WEEKS) continue;
        at[g * count + k] = columnOf.length;
        columnOf.push(k);
        levelOf.push(level);
      }
    }
    return at;
  };
  const itemAt = place(panel.items.length, (s) => panel.series[s]!.item, 1);
  const locationAt = place(panel.locations.length, (s) => panel.series[s]!.location, 2);
  return {
    columns,
    size: columnOf.length,
    itemAt,
    locationAt,
    columnOf: Int32Array.from(columnOf),
    levelOf: Uint8Array.from(levelOf),
  };
}

/** Most weeks, over the series of each group, in which a column stood away from the series' usual value. */
function countMovedWeeks(
  panel: LinePanel,
  columns: readonly Column[],
  lastWeek: number,
  groupCount: number,
  groupOf: (s: number) => number,
): Float64Array {
  const count = columns.length;
  const most = new Float64Array(groupCount * count);
  panel.series.forEach((series, s) => {
    columns.forEach((column, k) => {
      if (!column.hasOwnSlopes) return;
      const moved = countWeeksAwayFromMedian(column.values[s]!, series.isUsed, lastWeek);
      const at = groupOf(s) * count + k;
      if (moved > most[at]!) most[at] = moved;
    });
  });
  return most;
}

const medianOf = new WeakMap<Float64Array, number>();

/** Used weeks up to `lastWeek` in which the values stand more than 0.02 from their median over all used weeks. */
export function countWeeksAwayFromMedian(values: Float64Array, isUsed: Uint8Array, lastWeek: number): number {
  let median = medianOf.get(values);
  if (median === undefined) {
    const sorted = values.filter((_, t) => isUsed[t]).sort();
    median = sorted.length > 0 ? sorted[sorted.length >> 1]! : 0;
    medianOf.set(values, median);
  }
  let moved = 0;
  for (let t = 0; t <= lastWeek; t++) if (isUsed[t] && Math.abs(values[t]! - median) > SMALLEST_MOVE) moved++;
  return moved;
}

import type { LinePanel } from '../features/line-panel.ts';

const MOST_ORIGINS = 12;
const WEEKS_BETWEEN_ORIGINS = 4;
const LONGEST_HORIZON = 8;
const FEWEST_TRAINING_WEEKS = 26;

/** The cells on which candidates are compared: used weeks after rolling origins inside the training weeks. */
export interface RollingFrame {
  /** Week index of each origin, latest first. */
  origins: number[];
  /** Per cell: index of its origin, series, week and units. */
  originOf: Int32Array;
  seriesOf: Int32Array;
  weekOf: Int32Array;
  units: Float64Array;
}

/**
 * Up to twelve origins four weeks apart (closer where the history is short), the latest a horizon (at most eight weeks) before the
 * end of the training weeks, the earliest with at least 26 weeks before it. Empty where there's no room for two.
 */
export function buildRollingFrame(panel: LinePanel): RollingFrame {
  const horizon = Math.min(LONGEST_HORIZON, panel.horizon);
  const latest = panel.pastWeeks - 1 - horizon;
  const room = latest - (FEWEST_TRAINING_WEEKS - 1);
  const step = Math.max(1, Math.min(WEEKS_BETWEEN_ORIGINS, Math.floor(room / 4)));
  const origins: number[] = [];
  for (let at = latest; at >= FEWEST_TRAINING_WEEKS - 1 && origins.length < MOST_ORIGINS; at -= step) origins.push(at);
  if (origins.length < 2) origins.length = 0;
  const originOf: number[] = [];
  const seriesOf: number[] = [];
  const weekOf: number[] = [];
  const units: number[] = [];
  origins.forEach((origin, o) => {
    const lastCell = Math.min(origin + panel.horizon, panel.pastWeeks - 1);
    panel.series.forEach((series, s) => {
      if (countUsed(series.isUsed, origin) < 4) return;
      for (let t = origin + 1; t <= lastCell; t++) {
        if (!series.isUsed[t]) continue;
        originOf.push(o);
        seriesOf.push(s);
        weekOf.push(t);
        units.push(series.units[t]!);
      }
    });
  });
  return {
    origins,
    originOf: Int32Array.from(originOf),
    seriesOf: Int32Array.from(seriesOf),
    weekOf: Int32Array.from(weekOf),
    units: Float64Array.from(units),
  };
}

function countUsed(isUsed: Uint8Array, lastWeek: number): number {
  let used = 0;
  for (let t = 0; t <= lastWeek; t++) used += isUsed[t]!;
  return used;
}

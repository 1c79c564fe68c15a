import { addWeeks, listWeeks, weeksBetween } from '../../shared/domain/weeks.ts';
import type { Weekline } from '../../shared/contracts/plan.ts';

export interface WeekRange {
  firstWeek: string;
  lastWeek: string;
}

export interface BandWeek {
  weekStart: string;
  /** Units sold or planned; null where nothing is known. */
  units: number | null;
  isPlanned: boolean;
  isPromoted: boolean;
  isLocked: boolean;
  holidays: string[];
  /** Units of the week 52 weeks before, in planned weeks. */
  lastYear: number | null;
}

/** Every week of the band, sold ones first. */
export function listBandWeeks(weekline: Weekline): BandWeek[] {
  const promoted = new Set(weekline.promotedWeeks);
  const locked = new Set(weekline.lockedWeeks);
  const holidays = new Map<string, string[]>();
  for (const { weekStart, name } of weekline.holidays) {
    holidays.set(weekStart, [...(holidays.get(weekStart) ?? []), name]);
  }
  const soldWeeks = weekline.sold.length;
  return listWeeks(weekline.firstWeek, soldWeeks + weekline.planned.length).map((weekStart, index) => ({
    weekStart,
    units: index < soldWeeks ? (weekline.sold[index] ?? null) : (weekline.planned[index - soldWeeks] ?? null),
    isPlanned: index >= soldWeeks,
    isPromoted: promoted.has(weekStart),
    isLocked: locked.has(weekStart),
    holidays: holidays.get(weekStart) ?? [],
    lastYear: index >= soldWeeks ? (weekline.sold[index - 52] ?? null) : null,
  }));
}

/** Runs of neighbouring positions for which `is` holds, as [first, last]. */
export function findRuns(length: number, is: (position: number) => boolean): [number, number][] {
  const runs: [number, number][] = [];
  for (let position = 0; position < length; position += 1) {
    if (!is(position)) continue;
    const last = runs.at(-1);
    if (last && last[1] === position - 1) last[1] = position;
    else runs.push([position, position]);
  }
  return runs;
}

/** Round heights for one or two lines behind the band: 1, 2 or 5 times a power of ten. */
export function chooseScaleLines(highest: number): number[] {
  if (!(highest > 0)) return [];
  const power = 10 ** Math.floor(Math.log10(highest));
  const step = [5, 2, 1, 0.5, 0.2].map((factor) => factor * power).find((size) => size <= highest / 2) ?? power / 5;
  return [1, 2].map((times) => times * step).filter((line) => line <= highest * 0.97);
}

/** The range as positions in the band, within it and in order. */
export function toPositions(range: WeekRange, firstWeek: string, weeks: number): [number, number] {
  const clamp = (position: number) => Math.min(weeks - 1, Math.max(0, position));
  const first = clamp(weeksBetween(firstWeek, range.firstWeek));
  return [first, Math.max(first, clamp(weeksBetween(firstWeek, range.lastWeek)))];
}

export type Handle = 'first' | 'last' | 'both';

/** Moves one handle (or both together) by whole weeks; handles never cross and the band is never left. */
export function moveHandle(
  [first, last]: [number, number],
  handle: Handle,
  by: number,
  weeks: number,
): [number, number] {
  if (handle === 'first') return [Math.min(last, Math.max(0, first + by)), last];
  if (handle === 'last') return [first, Math.max(first, Math.min(weeks - 1, last + by))];
  const step = Math.max(-first, Math.min(weeks - 1 - last, by));
  return [first + step, last + step];
}

/**
 * The range after a handle went from one pair of positions to another. The other end stays where the page has it, even where that lies
 * beyond the band.
 */
export function moveRange(
  range: WeekRange,
  [firstBefore, lastBefore]: [number, number],
  [first, last]: [number, number],
  handle: Handle,
): WeekRange {
  const firstWeek = addWeeks(range.firstWeek, first - firstBefore);
  const lastWeek = addWeeks(range.lastWeek, last - lastBefore);
  if (handle === 'first') return { firstWeek, lastWeek: range.lastWeek };
  if (handle === 'last') return { firstWeek: range.firstWeek, lastWeek };
  return { firstWeek, lastWeek };
}

/** Weeks that a key moves a slider by; null for keys that it doesn't know. */
export function stepOfKey(key: string, weeks: number): number | null {
  switch (key) {
    case 'ArrowLeft':
    case 'ArrowDown':
      return -1;
    case 'ArrowRight':
    case 'ArrowUp':
      return 1;
    case 'PageDown':
      return -4;
    case 'PageUp':
      return 4;
    case 'Home':
      return -weeks;
    case 'End':
      return weeks;
    default:
      return null;
  }
}

import { addWeeks, listWeeks, shortWeekLabel, weekLabel, weeksBetween } from '../../../shared/domain/weeks.ts';

/** One week across the grid. `index` counts from the first week of history, or from the first planned week. */
export interface GridColumn {
  weekStart: string;
  label: string;
  /** `2026-W49`. */
  fullLabel: string;
  kind: 'history' | 'plan';
  index: number;
  isLocked: boolean;
  /** The last week before the seam: room for the seam is left after it. */
  isBeforeSeam: boolean;
}

export interface WeekSpan {
  historyFirstWeek: string | null;
  planFirstWeek: string | null;
  planWeeks: number;
  lockedWeeks: readonly string[];
}

/** The weeks from `from` to `to` that the history or the plan holds, in order. */
export function buildColumns(span: WeekSpan, from: string, to: string): GridColumn[] {
  const locked = new Set(span.lockedWeeks);
  const { historyFirstWeek, planFirstWeek } = span;
  if (planFirstWeek === null) return [];
  const lastWeek = addWeeks(planFirstWeek, span.planWeeks - 1);
  const firstHeld = historyFirstWeek ?? planFirstWeek;
  const first = from < firstHeld ? firstHeld : from;
  const last = to > lastWeek ? lastWeek : to;
  return listWeeks(first, weeksBetween(first, last) + 1).map((weekStart) => {
    const isPlanned = weekStart >= planFirstWeek;
    return {
      weekStart,
      label: shortWeekLabel(weekStart),
      fullLabel: weekLabel(weekStart),
      kind: isPlanned ? 'plan' : 'history',
      index: weeksBetween(isPlanned ? planFirstWeek : firstHeld, weekStart),
      isLocked: isPlanned && locked.has(weekStart),
      isBeforeSeam: !isPlanned && addWeeks(weekStart, 1) === planFirstWeek && last >= planFirstWeek,
    };
  });
}

/** Weeks shown at first: some history to see where the line comes from, and the whole plan. */
export function defaultWindow(span: WeekSpan, historyWeeks = 6): { from: string; to: string } | null {
  if (span.planFirstWeek === null) return null;
  return {
    from: addWeeks(span.planFirstWeek, -historyWeeks),
    to: addWeeks(span.planFirstWeek, Math.max(1, span.planWeeks) - 1),
  };
}

/** Weeks of history to ask for, so that a moved handle seldom asks again: the next of a few sizes. */
export function historyWeeksToAsk(from: string | null, planFirstWeek: string | null): number {
  const sizes = [26, 52, 104, 160, 260, 520];
  if (from === null || planFirstWeek === null) return 26;
  const needed = weeksBetween(from, planFirstWeek);
  return sizes.find((size) => size >= needed) ?? 520;
}

export interface Run<Value> {
  value: Value;
  /** Positions among the columns, both included. */
  first: number;
  last: number;
}

/** Neighbouring columns that share a value, e.g. the months of the header. A month is that of the week's fourth day; a run never crosses the seam. */
export function monthRuns(columns: readonly GridColumn[]): Run<string>[] {
  const runs: Run<string>[] = [];
  for (const [position, column] of columns.entries()) {
    const month = new Date(Date.parse(`${column.weekStart}T00:00:00Z`) + 3 * 86_400_000).toISOString().slice(0, 7);
    const open = runs.at(-1);
    const isAfterSeam = columns[position - 1]?.isBeforeSeam === true;
    if (open && open.value === month && !isAfterSeam) open.last = position;
    else runs.push({ value: month, first: position, last: position });
  }
  return runs;
}

export interface Pennant {
  name: string;
  first: number;
  last: number;
  lane: number;
  /** Promotions under the same name and weeks. */
  count: number;
  firstWeek: string;
  lastWeek: string;
  /** Position where the next pennant of its lane begins, or one past the last column: how far its name may reach. */
  freeUntil: number;
}

/**
 * Pennants of the header: promotions of one name whose weeks touch become one; each takes the first lane that is free. What finds no lane among
 * `lanes` is left out and counted in `hidden`.
 */
export function placePennants(
  promotions: readonly { name: string; firstWeek: string; lastWeek: string }[],
  columns: readonly GridColumn[],
  lanes: number,
): { pennants: Pennant[]; hidden: number } {
  const position = new Map(columns.map((column, at) => [column.weekStart, at]));
  const firstShown = columns[0]?.weekStart;
  const lastShown = columns.at(-1)?.weekStart;
  if (firstShown === undefined || lastShown === undefined) return { pennants: [], hidden: 0 };
  const shown = promotions
    .filter((promotion) => promotion.lastWeek >= firstShown && promotion.firstWeek <= lastShown)
    .map((promotion) => ({
      ...promotion,
      first: position.get(promotion.firstWeek < firstShown ? firstShown : promotion.firstWeek) ?? 0,
      last: position.get(promotion.lastWeek > lastShown ? lastShown : promotion.lastWeek) ?? columns.length - 1,
    }))
    .sort((a, b) => a.first - b.first || b.last - a.last || a.name.localeCompare(b.name));
  const merged: Omit<Pennant, 'lane' | 'freeUntil'>[] = [];
  for (const { name, first, last, firstWeek, lastWeek } of shown) {
    const same = merged.find((each) => each.name === name && first <= each.last + 1);
    if (same) {
      same.count += 1;
      if (last > same.last) Object.assign(same, { last, lastWeek });
    } else merged.push({ name, first, last, count: 1, firstWeek, lastWeek });
  }
  const lastInLane: number[] = [];
  const pennants: Pennant[] = [];
  let hidden = 0;
  for (const each of merged) {
    let lane = 0;
    while (lane < lanes && (lastInLane[lane] ?? -1) >= each.first) lane += 1;
    if (lane >= lanes) {
      hidden += 1;
      continue;
    }
    lastInLane[lane] = each.last;
    const before = pennants.findLast((held) => held.lane === lane);
    if (before) before.freeUntil = each.first;
    pennants.push({ ...each, lane, freeUntil: columns.length });
  }
  return { pennants, hidden };
}

/** Width in px of a column whose longest figure is `figures` (formatted text): the figure plus its margins and room for a mark, at least 48. */
export function columnWidth(figures: string): number {
  let width = 0;
  for (const character of figures) width += /\d/.test(character) ? 7.9 : 4;
  return Math.max(48, Math.ceil(width) + 16);
}

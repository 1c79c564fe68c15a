import type { CellConflict, OverrideInForce } from '../../../shared/contracts/plan.ts';
import {
  overridesByWeek,
  replayOverrides,
  scopeHolds,
  scopeKey,
  type Replay,
  type Scope,
  type UnmetReason,
} from '../../../shared/domain/override-arithmetic.ts';
import { listWeeks, weekLabel, weeksBetween } from '../../../shared/domain/weeks.ts';
import type { StoredOverride, StoredSeries } from './plan.repository.ts';

/** The weeks of a plan. */
export interface Window {
  firstWeek: string;
  weeks: number;
}

type Series = Pick<StoredSeries, 'itemId' | 'locationId' | 'unitStep'> & { readonly model: readonly number[] };

/** Sum over a scope's series, by week of the window. */
export function sumScope(
  series: readonly { itemId: number; locationId: number }[],
  rows: readonly (readonly number[])[],
  scope: Scope,
  weeks: number,
): number[] {
  const sums = new Array<number>(weeks).fill(0);
  series.forEach((one, index) => {
    if (!scopeHolds(scope, one)) return;
    for (let week = 0; week < weeks; week++) sums[week]! += rows[index]![week] ?? 0;
  });
  return sums;
}

/** Calls of `sumScope` for many scopes over the same rows; each scope is added up once. */
export function createScopeSums(
  series: readonly { itemId: number; locationId: number }[],
  rows: readonly (readonly number[])[],
  weeks: number,
): (scope: Scope) => number[] {
  const known = new Map<string, number[]>();
  const ofCell = new Map(series.map((one, index) => [scopeKey(one), rows[index]!]));
  return (scope) => {
    const key = scopeKey(scope);
    if (scope.itemId !== null && scope.locationId !== null) return [...(ofCell.get(key) ?? [])];
    const sums = known.get(key) ?? sumScope(series, rows, scope, weeks);
    known.set(key, sums);
    return sums;
  };
}

/** Replays the overrides on the series' model; `lockedPlan` holds in the locked weeks. */
export function replayState(state: {
  window: Window;
  series: readonly Series[];
  overrides: readonly StoredOverride[];
  lockedWeeks: readonly string[];
  lockedPlan: readonly (readonly number[])[];
}): Replay {
  return replayOverrides({
    series: state.series,
    planFirstWeek: state.window.firstWeek,
    planWeeks: state.window.weeks,
    lockedWeeks: state.lockedWeeks,
    lockedPlan: state.lockedPlan,
    overrides: state.overrides,
  });
}

export interface PlanChange {
  changedCells: number;
  changedUnits: number;
  /** Positions of the series whose numbers differ. */
  changedSeries: number[];
}

/** Cells that differ between two states of the same series and weeks, and the sum of the differences. */
export function comparePlans(
  before: readonly (readonly number[])[],
  after: readonly (readonly number[])[],
): PlanChange {
  const change: PlanChange = { changedCells: 0, changedUnits: 0, changedSeries: [] };
  after.forEach((row, index) => {
    let cells = 0;
    row.forEach((units, week) => {
      const was = before[index]?.[week] ?? 0;
      if (units === was) return;
      cells += 1;
      change.changedUnits += units - was;
    });
    if (cells > 0) change.changedSeries.push(index);
    change.changedCells += cells;
  });
  change.changedUnits = Math.round(change.changedUnits * 1e6) / 1e6;
  return change;
}

/** Finds the overrides whose scope a given one holds, without looking at all of them where it is a single series. */
export function indexByScope(overrides: readonly StoredOverride[]): (holder: Scope) => readonly StoredOverride[] {
  const byScope = new Map<string, StoredOverride[]>();
  for (const override of overrides) {
    const key = scopeKey(override.scope);
    const ofScope = byScope.get(key);
    if (ofScope) ofScope.push(override);
    else byScope.set(key, [override]);
  }
  return (holder) =>
    holder.itemId !== null && holder.locationId !== null
      ? (byScope.get(scopeKey(holder)) ?? [])
      : [...byScope.values()].flatMap((ofScope) => (scopeHolds(holder, ofScope[0]!.scope) ? ofScope : []));
}

export function shareWeek(a: WeekRange, b: WeekRange): boolean {
  return a.firstWeek <= b.lastWeek && b.firstWeek <= a.lastWeek;
}

interface WeekRange {
  firstWeek: string;
  lastWeek: string;
}

/** Why an override can't be met, as the end of a sentence. */
export const whyUnmet: Readonly<Record<UnmetReason, string>> = {
  locked: 'the week is locked',
  fixed: 'values set on items or locations under this total leave no way to meet it',
  'no-room': 'it would take more units away than are planned, or the unit steps can’t make it',
};

/**
 * Overrides in force, for the grid: those that aren't cleared in every week of the window, and the clears that still matter for one of them.
 * An override is due another look where, over the weeks in which nothing of the same scope was set after it, its model has moved by more than
 * `lookThreshold` of what it was; it needs a decision where it can't be met in such a week.
 */
export function describeOverrides(state: {
  window: Window;
  series: readonly Series[];
  overrides: readonly StoredOverride[];
  lockedWeeks: readonly string[];
  unmet: Replay['unmet'];
  lookThreshold: number;
}): OverrideInForce[] {
  const { window, series, overrides, lookThreshold } = state;
  const locked = new Set(state.lockedWeeks);
  const weekStarts = listWeeks(window.firstWeek, window.weeks);
  const modelOf = createScopeSums(
    series,
    series.map(({ model }) => model),
    window.weeks,
  );
  const kept = new Set<number>();
  const openWeeks = new Map<number, number[]>();
  overridesByWeek(overrides, window.firstWeek, window.weeks).forEach((ofWeek, week) => {
    const isLocked = locked.has(weekStarts[week]!);
    const setLater = new Set<string>();
    for (let i = ofWeek.length - 1; i >= 0; i--) {
      const { id, scope, operation } = ofWeek[i]!;
      kept.add(id);
      if (!isLocked && !setLater.has(scopeKey(scope))) {
        const weeks = openWeeks.get(id);
        if (weeks) weeks.push(week);
        else openWeeks.set(id, [week]);
      }
      if (operation === 'set to') setLater.add(scopeKey(scope));
    }
  });
  const unmet = new Map<number, string>();
  for (const { id, weekStart, reason } of state.unmet) {
    const week = weeksBetween(window.firstWeek, weekStart);
    if (reason !== 'locked' && openWeeks.get(id)?.includes(week) === true && !unmet.has(id)) {
      unmet.set(id, `${weekLabel(weekStart)}: ${whyUnmet[reason]}`);
    }
  }
  const heldInForce = indexByScope(overrides.filter(({ id }) => kept.has(id)));
  const isNeeded = (clear: StoredOverride): boolean =>
    heldInForce(clear.scope).some((other) => other.sequence < clear.sequence && shareWeek(clear, other));
  return overrides
    .filter((override) => kept.has(override.id) || (override.operation === 'clear' && isNeeded(override)))
    .map((override): OverrideInForce => {
      const { lineId: _line, authorId: _author, ...shown } = override;
      const model = modelOf(override.scope);
      const firstPosition = weeksBetween(window.firstWeek, override.firstWeek);
      let base = 0;
      let moved = 0;
      for (const week of openWeeks.get(override.id) ?? []) {
        const was = override.baseModel[week - firstPosition] ?? 0;
        base += was;
        moved += Math.abs((model[week] ?? 0) - was);
      }
      return {
        ...shown,
        isDueAnotherLook: override.operation !== 'clear' && moved > lookThreshold * base + 1e-9,
        needsDecision: unmet.get(override.id) ?? null,
      };
    });
}

interface Edit extends WeekRange {
  scope: Scope;
}

export interface Clash {
  scope: Scope;
  weekStart: string;
  theirs: StoredOverride;
}

/** Cells and totals of a save that meet something another person changed after the base version, each with the newest such change. */
export function findClashes(
  edits: readonly Edit[],
  overrides: readonly StoredOverride[],
  { baseVersion, authorId }: { baseVersion: number; authorId: number },
): Clash[] {
  const theirs = overrides.filter((override) => override.version > baseVersion && override.authorId !== authorId);
  const newest = new Map<string, Map<number | null, Map<number | null, StoredOverride>>>();
  for (const other of theirs) {
    for (const weekStart of weeksOf(other)) {
      const items = newest.get(weekStart) ?? new Map<number | null, Map<number | null, StoredOverride>>();
      const locations = items.get(other.scope.itemId) ?? new Map<number | null, StoredOverride>();
      newest.set(weekStart, items.set(other.scope.itemId, locations.set(other.scope.locationId, other)));
    }
  }
  const clashes = new Map<string, Clash>();
  for (const { scope, ...range } of edits) {
    for (const weekStart of theirs.length > 0 ? weeksOf(range) : []) {
      const met = valuesMet(newest.get(weekStart), scope.itemId)
        .flatMap((locations) => valuesMet(locations, scope.locationId))
        .reduce<StoredOverride | null>((last, one) => (last && last.sequence > one.sequence ? last : one), null);
      if (met) clashes.set(`${scopeKey(scope)}@${weekStart}`, { scope, weekStart, theirs: met });
    }
  }
  return [...clashes.values()];
}

function weeksOf({ firstWeek, lastWeek }: WeekRange): string[] {
  return listWeeks(firstWeek, weeksBetween(firstWeek, lastWeek) + 1);
}

/** Entries that share something with a part of a scope: all with the whole, else those of the part and of the whole. */
function valuesMet<Value>(entries: ReadonlyMap<number | null, Value> | undefined, id: number | null): Value[] {
  if (!entries) return [];
  if (id === null) return [...entries.values()];
  return [entries.get(id), entries.get(null)].filter((value) => value !== undefined);
}

/** Words the clashes for a person: the plan of each in the base version, in the newest one, and as this save wants it. */
export function describeClashes(
  clashes: readonly Clash[],
  plans: {
    before: (scope: Scope, weekStart: string) => number;
    theirs: (scope: Scope, weekStart: string) => number;
    yours: (scope: Scope, weekStart: string) => number;
  },
): CellConflict[] {
  return clashes.map(({ scope, weekStart, theirs }) => ({
    scope,
    weekStart,
    yours: plans.yours(scope, weekStart),
    theirs: plans.theirs(scope, weekStart),
    before: plans.before(scope, weekStart),
    theirAuthor: theirs.author,
    theirAt: theirs.at,
    theirReason: theirs.reason,
    theirNote: theirs.note,
    theirVersion: theirs.version,
  }));
}

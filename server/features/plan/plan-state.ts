import type { CellConflict, OverrideInForce } from '../../../shared/contracts/plan.ts';
import {
  overridesByWeek,
  replayOverrides,
  scopeHolds,
  scopeKey,
  scopesMeet,
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
  const inForce = new Map<string, StoredOverride[]>();
  for (const override of overrides) {
    if (!kept.has(override.id)) continue;
    const ofScope = inForce.get(scopeKey(override.scope));
    if (ofScope) ofScope.push(override);
    else inForce.set(scopeKey(override.scope), [override]);
  }
  const isNeeded = (clear: StoredOverride): boolean => {
    const isSeries = clear.scope.itemId !== null && clear.scope.locationId !== null;
    const held = isSeries
      ? (inForce.get(scopeKey(clear.scope)) ?? [])
      : [...inForce.values()].flatMap((ofScope) => (scopeHolds(clear.scope, ofScope[0]!.scope) ? ofScope : []));
    return held.some(
      ({ sequence, firstWeek, lastWeek }) =>
        sequence < clear.sequence && firstWeek <= clear.lastWeek && clear.firstWeek <= lastWeek,
    );
  };
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

interface Edit {
  scope: Scope;
  firstWeek: string;
  lastWeek: string;
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
  if (theirs.length === 0) return [];
  const clashes = new Map<string, Clash>();
  for (const edit of edits) {
    for (const other of theirs) {
      if (!scopesMeet(edit.scope, other.scope)) continue;
      const first = edit.firstWeek > other.firstWeek ? edit.firstWeek : other.firstWeek;
      const last = edit.lastWeek < other.lastWeek ? edit.lastWeek : other.lastWeek;
      if (first > last) continue;
      for (const weekStart of listWeeks(first, weeksBetween(first, last) + 1)) {
        clashes.set(`${scopeKey(edit.scope)}@${weekStart}`, { scope: edit.scope, weekStart, theirs: other });
      }
    }
  }
  return [...clashes.values()];
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

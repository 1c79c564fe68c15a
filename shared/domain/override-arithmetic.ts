import { findTicksPerUnit, greatestCommonDivisor, spreadInSteps } from './spreading.ts';
import { addWeeks, weeksBetween } from './weeks.ts';

/** Both null = the whole line; item only = the item over its locations; location only = the location over its items; both = one series. */
export interface Scope {
  itemId: number | null;
  locationId: number | null;
}

export interface ReplayedSeries {
  itemId: number;
  locationId: number;
  /** Smallest step in which the series is planned, units > 0. */
  unitStep: number;
  /** Units by week. */
  model: readonly number[];
}

export interface ReplayedOverride {
  id: number;
  sequence: number;
  scope: Scope;
  firstWeek: string;
  lastWeek: string;
  operation: 'set to' | 'add' | 'scale by' | 'clear';
  /** Units for set to and add, a factor for scale by, null for clear. */
  value: number | null;
}

export type UnmetReason = 'locked' | 'fixed' | 'no-room';

export interface Replay {
  /** Units, series × weeks. */
  plan: number[][];
  /** Id of the last override that changed the cell, or that names just this series; null where the model stands. */
  overriddenBy: (number | null)[][];
  /** Where an override had no effect: the week is locked, finer values set earlier leave nothing to change, or no units are left to take away. */
  unmet: { id: number; weekStart: string; reason: UnmetReason }[];
}

export interface ReplayInput {
  series: readonly ReplayedSeries[];
  planFirstWeek: string;
  planWeeks: number;
  lockedWeeks: readonly string[];
  /** Values that hold in locked weeks, series × weeks; null = none. */
  lockedPlan: readonly (readonly number[])[] | null;
  /** Ascending by sequence. */
  overrides: readonly ReplayedOverride[];
}

/** Whether every cell of `inner` is one of `outer`. */
export function scopeHolds(outer: Scope, inner: Scope): boolean {
  return (
    (outer.itemId === null || outer.itemId === inner.itemId) &&
    (outer.locationId === null || outer.locationId === inner.locationId)
  );
}

/** Whether the two scopes share a cell (provided the series exists). */
export function scopesMeet(a: Scope, b: Scope): boolean {
  return (
    (a.itemId === null || b.itemId === null || a.itemId === b.itemId) &&
    (a.locationId === null || b.locationId === null || a.locationId === b.locationId)
  );
}

export function scopeKey({ itemId, locationId }: Scope): string {
  return `${itemId ?? '*'}/${locationId ?? '*'}`;
}

/** Keys of every scope that holds this one, itself included. */
function keysOfHolders({ itemId, locationId }: Scope): string[] {
  const items = itemId === null ? ['*'] : [itemId, '*'];
  const locations = locationId === null ? ['*'] : [locationId, '*'];
  return items.flatMap((item) => locations.map((location) => `${item}/${location}`));
}

/**
 * Overrides by week of the plan, in order, without the clears and what they cleared: a clear removes earlier overrides of the same or a finer
 * scope in its weeks, as if they had never been made.
 */
export function overridesByWeek<Override extends ReplayedOverride>(
  overrides: readonly Override[],
  planFirstWeek: string,
  planWeeks: number,
): Override[][] {
  const byWeek: Override[][] = Array.from({ length: planWeeks }, () => []);
  for (const override of overrides) {
    const first = Math.max(0, weeksBetween(planFirstWeek, override.firstWeek));
    const last = Math.min(planWeeks - 1, weeksBetween(planFirstWeek, override.lastWeek));
    for (let week = first; week <= last; week++) byWeek[week]!.push(override);
  }
  return byWeek.map((ofWeek) => {
    if (!ofWeek.some(({ operation }) => operation === 'clear')) return ofWeek;
    const cleared = new Set<string>();
    return keepBackwards(ofWeek, ({ operation, scope }) => {
      if (operation !== 'clear') return !keysOfHolders(scope).some((key) => cleared.has(key));
      cleared.add(scopeKey(scope));
      return false;
    });
  });
}

/** Leaves out a series' overrides that a later *set to* of the same series makes void, with no total between them that their value could enter. */
function leaveOutVoid(ofWeek: readonly ReplayedOverride[]): readonly ReplayedOverride[] {
  if (ofWeek.length < 2) return ofWeek;
  const setLater = new Set<string>();
  return keepBackwards(ofWeek, ({ operation, scope }) => {
    const key = scopeKey(scope);
    if (scope.itemId === null || scope.locationId === null) setLater.clear();
    else if (setLater.has(key)) return false;
    else if (operation === 'set to') setLater.add(key);
    return true;
  });
}

/** Asks from the last to the first; what is kept stays in order. */
function keepBackwards<Override>(all: readonly Override[], isKept: (override: Override) => boolean): Override[] {
  const kept: Override[] = [];
  for (let i = all.length - 1; i >= 0; i--) if (isKept(all[i]!)) kept.push(all[i]!);
  return kept.reverse();
}

const setOnSeries = 1;
const setOnItem = 2;
const setOnLocation = 4;

function heldFlags({ itemId, locationId }: Scope): number {
  if (itemId !== null && locationId !== null) return 0;
  return itemId === null && locationId === null ? setOnSeries | setOnItem | setOnLocation : setOnSeries;
}

function flagOf({ itemId, locationId }: Scope): number {
  if (itemId !== null && locationId !== null) return setOnSeries;
  if (itemId !== null) return setOnItem;
  return locationId !== null ? setOnLocation : 0;
}

/**
 * The plan: the model with the overrides applied in their order. Each week stands alone. A total's override changes the total of its scope and spreads
 * over the cells below in proportion to the plan (to the model where that total is zero, evenly where the model is zero too), in unit steps by
 * largest remainders; the sum is exact to the finest step. Values set earlier on a finer scope hold and the rest takes the change; nothing goes below
 * zero; where that can't be met the override has no effect in that week and is listed in `unmet`. Locked weeks keep `lockedPlan`.
 */
export function replayOverrides(input: ReplayInput): Replay {
  const { series, planFirstWeek, planWeeks, lockedPlan } = input;
  const locked = new Set(input.lockedWeeks.map((week) => weeksBetween(planFirstWeek, week)));
  const plan = series.map(({ model }, index) =>
    Array.from({ length: planWeeks }, (_, week) =>
      lockedPlan !== null && locked.has(week) ? lockedPlan[index]![week]! : (model[week] ?? 0),
    ),
  );
  const overriddenBy = series.map(() => new Array<number | null>(planWeeks).fill(null));
  const unmet: Replay['unmet'] = [];
  if (input.overrides.length === 0) return { plan, overriddenBy, unmet };

  const ticksPerUnit = findTicksPerUnit([...new Set(series.map(({ unitStep }) => unitStep))]);
  const steps = Float64Array.from(series, ({ unitStep }) => Math.max(1, Math.round(unitStep * ticksPerUnit)));
  const membersOf = indexMembers(series);
  const ticks = new Float64Array(series.length);
  const fixed = new Uint8Array(series.length);
  const byWeek = overridesByWeek(input.overrides, planFirstWeek, planWeeks);

  for (let week = 0; week < planWeeks; week++) {
    const ofWeek = byWeek[week]!;
    if (ofWeek.length === 0) continue;
    const refuse = (override: ReplayedOverride, reason: UnmetReason): void => {
      unmet.push({ id: override.id, weekStart: addWeeks(planFirstWeek, week), reason });
    };
    if (locked.has(week)) {
      for (const override of ofWeek) refuse(override, 'locked');
      continue;
    }
    fixed.fill(0);
    for (let i = 0; i < ticks.length; i++) ticks[i] = Math.round(plan[i]![week]! * ticksPerUnit);

    for (const override of leaveOutVoid(ofWeek)) {
      const { scope, operation, id } = override;
      const value = override.value ?? 0;
      const members = membersOf(scope);
      const holding = heldFlags(scope);
      let held = 0;
      let current = 0;
      const free: number[] = [];
      for (const index of members) {
        if ((fixed[index]! & holding) !== 0) held += ticks[index]!;
        else {
          free.push(index);
          current += ticks[index]!;
        }
      }
      const total = held + current;
      const wanted =
        operation === 'set to'
          ? value * ticksPerUnit
          : operation === 'add'
            ? total + value * ticksPerUnit
            : total * value;
      const divisor = commonStep(free, steps);
      const target = divisor * roundHalfUp((wanted - held) / divisor);
      if (target !== current) {
        if (members.length === 0 || wanted < 0) {
          refuse(override, 'no-room');
          continue;
        }
        if (target < 0 || free.length === 0) {
          refuse(override, 'fixed');
          continue;
        }
        const parts = spreadOver(free, target, current, { ticks, steps, series, week });
        if (parts === null) {
          refuse(override, 'no-room');
          continue;
        }
        for (let i = 0; i < free.length; i++) {
          const index = free[i]!;
          if (ticks[index] === parts[i]) continue;
          ticks[index] = parts[i]!;
          plan[index]![week] = parts[i]! / ticksPerUnit;
          overriddenBy[index]![week] = id;
        }
      }
      if (scope.itemId !== null && scope.locationId !== null) {
        for (const index of members) overriddenBy[index]![week] = id;
      }
      if (operation === 'set to') {
        const flag = flagOf(scope);
        for (const index of members) fixed[index]! |= flag;
      }
    }
  }
  return { plan, overriddenBy, unmet };
}

function spreadOver(
  free: readonly number[],
  target: number,
  current: number,
  cells: { ticks: Float64Array; steps: Float64Array; series: readonly ReplayedSeries[]; week: number },
): Float64Array | null {
  const { ticks, steps, series, week } = cells;
  if (free.length === 1) return Float64Array.of(target);
  let weights = Float64Array.from(free, (index) => ticks[index]!);
  if (current <= 0) {
    weights = Float64Array.from(free, (index) => series[index]!.model[week] ?? 0);
    if (!weights.some((weight) => weight > 0)) weights.fill(1);
  }
  const { parts, left } = spreadInSteps(
    target,
    weights,
    Float64Array.from(free, (index) => steps[index]!),
  );
  return left === 0 ? parts : null;
}

function commonStep(free: readonly number[], steps: Float64Array): number {
  const first = steps[free[0] ?? -1];
  if (first === undefined) return 1;
  if (free.every((index) => steps[index] === first)) return first;
  return greatestCommonDivisor(free.map((index) => steps[index]!));
}

/** Half a step goes up; -0 and the binary tail of a product such as 1.15 × 20 don't count. */
function roundHalfUp(value: number): number {
  return Math.floor(value + 0.5 + 1e-9) + 0;
}

function indexMembers(series: readonly ReplayedSeries[]): (scope: Scope) => readonly number[] {
  const all: number[] = [];
  const byKey = new Map<string, number[]>();
  series.forEach(({ itemId, locationId }, index) => {
    all.push(index);
    for (const key of [`${itemId}/*`, `*/${locationId}`, `${itemId}/${locationId}`]) {
      const members = byKey.get(key);
      if (members) members.push(index);
      else byKey.set(key, [index]);
    }
  });
  return (scope) => (scope.itemId === null && scope.locationId === null ? all : (byKey.get(scopeKey(scope)) ?? []));
}

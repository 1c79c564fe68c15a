import type { LinePlan, OverrideInForce, VersionState } from '../../../shared/contracts/plan.ts';
import { overridesByWeek, replayOverrides } from '../../../shared/domain/override-arithmetic.ts';
import { listWeeks, weeksBetween } from '../../../shared/domain/weeks.ts';
import { normalScopeKey, type GridRow } from './grid-rows.ts';
import type { PendingEdit } from './pending-edits.ts';

export interface UnmetEdit {
  edit: PendingEdit;
  weekStart: string;
  reason: 'locked' | 'fixed' | 'no-room';
}

/** The override that a scope holds in one week: saved, or still pending. */
export type OwnOverride = { kind: 'saved'; override: OverrideInForce } | { kind: 'pending'; edit: PendingEdit };

/** A line's numbers with the unsaved edits applied, series × planned weeks. */
export interface LineFigures {
  plan: number[][];
  /** Whether some override, of whatever scope, touched the cell. */
  isTouched: boolean[][];
  /** By scope key (`normalScopeKey`) and position of the planned week: the overrides of exactly that scope, in order. */
  ownOverrides: Map<string, OwnOverride[][]>;
  /** By scope key: planned weeks with an unsaved edit of that scope. */
  pendingWeeks: Map<string, Set<number>>;
  unmet: UnmetEdit[];
}

/** Number that pending edits get in the replay, apart from every saved id. */
const pendingId = (index: number) => -1 - index;

/** Applies the overrides in force and then the pending edits to the model, exactly as the server does on saving. */
export function computeFigures(plan: LinePlan, pending: readonly PendingEdit[]): LineFigures {
  const { planFirstWeek, planWeeks } = plan;
  if (planFirstWeek === null) {
    return { plan: [], isTouched: [], ownOverrides: new Map(), pendingWeeks: new Map(), unmet: [] };
  }
  const unitSteps = new Map(plan.items.map(({ id, unitStep }) => [id, unitStep]));
  const lastSequence = plan.overrides.reduce((last, { sequence }) => Math.max(last, sequence), 0);
  const overrides = [
    ...plan.overrides.map(({ id, sequence, scope, firstWeek, lastWeek, operation, value }) => ({
      id,
      sequence,
      scope,
      firstWeek,
      lastWeek,
      operation,
      value,
    })),
    ...pending.map((edit, index) => ({ ...edit, id: pendingId(index), sequence: lastSequence + 1 + index })),
  ];
  const replayed = replayOverrides({
    series: plan.series.map(({ itemId, locationId, model }) => ({
      itemId,
      locationId,
      unitStep: unitSteps.get(itemId) ?? 1,
      model,
    })),
    planFirstWeek,
    planWeeks,
    lockedWeeks: plan.lockedWeeks,
    lockedPlan: plan.lockedWeeks.length > 0 ? plan.series.map((series) => series.plan) : null,
    overrides,
  });

  const savedById = new Map(plan.overrides.map((override) => [override.id, override]));
  const ownOverrides = new Map<string, OwnOverride[][]>();
  for (const [week, ofWeek] of overridesByWeek(overrides, planFirstWeek, planWeeks).entries()) {
    for (const { id, scope } of ofWeek) {
      const saved = savedById.get(id);
      const edit = pending[-1 - id];
      const own: OwnOverride | null = saved
        ? { kind: 'saved', override: saved }
        : edit
          ? { kind: 'pending', edit }
          : null;
      if (!own) continue;
      const key = normalScopeKey(scope, plan);
      let weeks = ownOverrides.get(key);
      if (!weeks) {
        weeks = Array.from({ length: planWeeks }, () => []);
        ownOverrides.set(key, weeks);
      }
      weeks[week]?.push(own);
    }
  }
  const pendingWeeks = new Map<string, Set<number>>();
  for (const edit of pending) {
    const key = normalScopeKey(edit.scope, plan);
    const held = pendingWeeks.get(key) ?? new Set();
    pendingWeeks.set(key, held);
    const first = Math.max(0, weeksBetween(planFirstWeek, edit.firstWeek));
    const last = Math.min(planWeeks - 1, weeksBetween(planFirstWeek, edit.lastWeek));
    for (let week = first; week <= last; week += 1) held.add(week);
  }
  return {
    plan: pending.length === 0 ? plan.series.map((series) => series.plan) : replayed.plan,
    isTouched: replayed.overriddenBy.map((weeks) => weeks.map((id) => id !== null)),
    ownOverrides,
    pendingWeeks,
    unmet: replayed.unmet.flatMap(({ id, weekStart, reason }) => {
      const edit = pending[-1 - id];
      return id < 0 && edit ? [{ edit, weekStart, reason }] : [];
    }),
  };
}

/** What a row shows. History and plan by position of the week; marks by position of the planned week. */
export interface RowFigures extends RowHistory {
  model: number[];
  plan: number[];
  marks: CellMarks[];
}

/** The part of a row that no edit changes. */
export interface RowHistory {
  history: (number | null)[];
  /** Series of the row that had a gap in that week of history; not counted for the total. */
  gaps: number[];
}

export interface CellMarks {
  /** `own`: changed on this row itself; `through`: by a change above or below it. */
  overridden: 'own' | 'through' | null;
  isDueAnotherLook: boolean;
  needsDecision: boolean;
  isOutsideRange: boolean;
  /** The model reaches beyond the prices, promotions or units ever seen in a series of the row. */
  isBeyondSeen: boolean;
  isPending: boolean;
}

export interface ModelRange {
  p2_5: number[];
  p10: number[];
  p50: number[];
  p90: number[];
  p97_5: number[];
}

/** The model's range for a row, where the run holds one for just these series. */
export function findRange(plan: LinePlan, row: GridRow): ModelRange | null {
  if (row.seriesIndexes.length === 1) return plan.series[row.seriesIndexes[0] ?? -1] ?? null;
  const key = normalScopeKey(row.scope, plan);
  return plan.totals.find((total) => normalScopeKey(total.scope, plan) === key) ?? null;
}

const sumAt = (arrays: readonly (readonly number[] | undefined)[], position: number) => {
  let sum = 0;
  for (const array of arrays) sum += array?.[position] ?? 0;
  return cleanSum(sum);
};

/** Sums of unit steps such as 0.1 without the crumbs of binary fractions. */
function cleanSum(sum: number): number {
  return Number.isInteger(sum) ? sum : Math.round(sum * 1e6) / 1e6;
}

export function computeHistory(plan: LinePlan, row: GridRow): RowHistory {
  const series = row.seriesIndexes.flatMap((index) => plan.series[index] ?? []);
  const historyWeeks = series[0]?.units.length ?? 0;
  const history: (number | null)[] = [];
  for (let week = 0; week < historyWeeks; week += 1) {
    let sum: number | null = null;
    for (const { units } of series) {
      const value = units[week];
      if (value !== null && value !== undefined) sum = (sum ?? 0) + value;
    }
    history.push(sum === null ? null : cleanSum(sum));
  }
  const gaps = new Array<number>(historyWeeks).fill(0);
  if (row.kind !== 'total') {
    for (const { gapAt } of series) for (const week of gapAt) gaps[week] = (gaps[week] ?? 0) + 1;
  }
  return { history, gaps };
}

export function computeRow(plan: LinePlan, figures: LineFigures, row: GridRow, held: RowHistory): RowFigures {
  const planArrays = row.seriesIndexes.map((index) => figures.plan[index]);
  const models = row.seriesIndexes.map((index) => plan.series[index]?.model);
  const own = figures.ownOverrides.get(normalScopeKey(row.scope, plan));
  const pending = figures.pendingWeeks.get(normalScopeKey(row.scope, plan));
  const range = findRange(plan, row);
  const result: RowFigures = { ...held, model: [], plan: [], marks: [] };
  for (let week = 0; week < plan.planWeeks; week += 1) {
    const value = sumAt(planArrays, week);
    const ofScope = own?.[week] ?? [];
    const isTouched = row.kind !== 'total' && row.seriesIndexes.some((index) => figures.isTouched[index]?.[week]);
    const saved = ofScope.flatMap((each) => (each.kind === 'saved' ? [each.override] : []));
    result.model.push(sumAt(models, week));
    result.plan.push(value);
    result.marks.push({
      overridden: ofScope.length > 0 ? 'own' : isTouched ? 'through' : null,
      isDueAnotherLook: saved.some((override) => override.isDueAnotherLook),
      needsDecision: saved.some((override) => override.needsDecision !== null),
      isOutsideRange:
        range !== null && (value < (range.p2_5[week] ?? -Infinity) || value > (range.p97_5[week] ?? Infinity)),
      isBeyondSeen: row.kind !== 'total' && listBeyondSeen(plan, row, week).length > 0,
      isPending: pending?.has(week) ?? false,
    });
  }
  return result;
}

/** Ways in which the model reaches beyond what was ever seen, of all series of the row in a planned week. */
export function listBeyondSeen(plan: LinePlan, row: GridRow, week: number): string[] {
  const kinds = row.seriesIndexes.flatMap((index) => plan.series[index]?.marks[String(week)] ?? []);
  return [...new Set(kinds)].filter((kind) => beyondSeenKinds.has(kind));
}

const beyondSeenKinds = new Set(['outside-seen-price', 'outside-seen-promotion', 'above-three-times-largest']);

/** Sum of a row in another version by weekStart; weeks that the version doesn't hold are missing. */
export function rowOfVersion(state: VersionState, plan: LinePlan, row: GridRow): Map<string, number> {
  const wanted = new Set(
    row.seriesIndexes.flatMap((index) => {
      const series = plan.series[index];
      return series ? [`${series.itemId}:${series.locationId}`] : [];
    }),
  );
  const arrays = state.series
    .filter((series) => wanted.has(`${series.itemId}:${series.locationId}`))
    .map((series) => series.plan);
  return new Map(
    listWeeks(state.planFirstWeek, state.planWeeks).map((weekStart, position) => [weekStart, sumAt(arrays, position)]),
  );
}

/** The line as an older version had it, for reading only; NaN where it doesn't hold the week. What differs from today's model is marked. */
export function asVersion(plan: LinePlan, state: VersionState): LineFigures {
  const byKey = new Map(state.series.map((series) => [`${series.itemId}:${series.locationId}`, series.plan]));
  const first = plan.planFirstWeek;
  const offset = first === null ? 0 : weeksBetween(state.planFirstWeek, first);
  const values = plan.series.map(({ itemId, locationId }) => {
    const held = byKey.get(`${itemId}:${locationId}`);
    return Array.from({ length: plan.planWeeks }, (_, week) => held?.[week + offset] ?? Number.NaN);
  });
  return {
    plan: values,
    isTouched: plan.series.map(({ model }, index) =>
      model.map((value, week) => {
        const held = values[index]?.[week];
        return held !== undefined && !Number.isNaN(held) && held !== value;
      }),
    ),
    ownOverrides: new Map(),
    pendingWeeks: new Map(),
    unmet: [],
  };
}

/** Weeks of the plan, in order. */
export function planWeekStarts(plan: Pick<LinePlan, 'planFirstWeek' | 'planWeeks'>): string[] {
  return plan.planFirstWeek === null ? [] : listWeeks(plan.planFirstWeek, plan.planWeeks);
}

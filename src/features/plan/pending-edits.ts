import type { OverrideOperation, OverrideScope } from '../../../shared/contracts/plan.ts';
import { scopeHolds, scopesMeet } from '../../../shared/domain/override-arithmetic.ts';
import { addWeeks } from '../../../shared/domain/weeks.ts';

/** A change that isn't saved yet. Every week from first to last gets the operation, as in a stored override. */
export interface PendingEdit {
  scope: OverrideScope;
  firstWeek: string;
  lastWeek: string;
  operation: OverrideOperation;
  /** Units, a factor for `scale by`, null for `clear`. */
  value: number | null;
}

/** Edits of one sitting: each step of `done` is what one key press, paste or *Apply* did. `baseVersion` is the version on screen at the first of them. */
export interface PendingEdits {
  baseVersion: number | null;
  done: PendingEdit[][];
  undone: PendingEdit[][];
}

export const noEdits: PendingEdits = { baseVersion: null, done: [], undone: [] };

export function addStep(edits: PendingEdits, step: PendingEdit[], shownVersion: number): PendingEdits {
  if (step.length === 0) return edits;
  return { baseVersion: edits.baseVersion ?? shownVersion, done: [...edits.done, step], undone: [] };
}

export function undoStep(edits: PendingEdits): PendingEdits {
  const last = edits.done.at(-1);
  if (!last) return edits;
  return { ...edits, done: edits.done.slice(0, -1), undone: [...edits.undone, last] };
}

export function redoStep(edits: PendingEdits): PendingEdits {
  const next = edits.undone.at(-1);
  if (!next) return edits;
  return { ...edits, done: [...edits.done, next], undone: edits.undone.slice(0, -1) };
}

export const isSameScope = (a: OverrideScope, b: OverrideScope) =>
  a.itemId === b.itemId && a.locationId === b.locationId;

interface WeekEdit {
  scope: OverrideScope;
  weekStart: string;
  operation: OverrideOperation;
  value: number | null;
}

function splitWeeks(edit: PendingEdit): WeekEdit[] {
  const weeks: WeekEdit[] = [];
  for (let weekStart = edit.firstWeek; weekStart <= edit.lastWeek; weekStart = addWeeks(weekStart, 1)) {
    weeks.push({ scope: edit.scope, weekStart, operation: edit.operation, value: edit.value });
  }
  return weeks;
}

/** Neighbours in order that do the same to the same scope in following weeks become one. */
function joinWeeks(weeks: readonly WeekEdit[]): PendingEdit[] {
  const joined: PendingEdit[] = [];
  for (const { scope, weekStart, operation, value } of weeks) {
    const open = joined.at(-1);
    if (
      open &&
      open.operation === operation &&
      open.value === value &&
      isSameScope(open.scope, scope) &&
      addWeeks(open.lastWeek, 1) === weekStart
    ) {
      open.lastWeek = weekStart;
    } else joined.push({ scope, firstWeek: weekStart, lastWeek: weekStart, operation, value });
  }
  return joined;
}

/**
 * The edits as they are shown and saved, in the fewest overrides: what a later *set to* of the same scope and week, or a *clear* that holds it, makes
 * void is left out as if it had never been typed, unless another change that meets it lies between; runs of weeks with the same change become one. A
 * *clear* with nothing to clear is left out; `isSaved` tells whether a scope, or one under it, has a saved override in a week.
 */
export function compactEdits(
  steps: readonly (readonly PendingEdit[])[],
  isSaved: (scope: OverrideScope, weekStart: string) => boolean = () => true,
): PendingEdit[] {
  const weeks = steps.flat().flatMap(splitWeeks);
  const laterInWeek = new Map<string, WeekEdit[]>();
  const kept: WeekEdit[] = [];
  for (let index = weeks.length - 1; index >= 0; index -= 1) {
    const edit = weeks[index];
    if (!edit) continue;
    const later = laterInWeek.get(edit.weekStart) ?? [];
    const nextThatMeets = later.findLast((each) => scopesMeet(each.scope, edit.scope));
    const isVoid =
      nextThatMeets !== undefined &&
      ((nextThatMeets.operation === 'set to' && isSameScope(nextThatMeets.scope, edit.scope)) ||
        (nextThatMeets.operation === 'clear' && scopeHolds(nextThatMeets.scope, edit.scope)));
    if (isVoid) continue;
    later.push(edit);
    laterInWeek.set(edit.weekStart, later);
    kept.push(edit);
  }
  kept.reverse();
  const clearsSomething = (clear: WeekEdit, position: number) =>
    isSaved(clear.scope, clear.weekStart) ||
    kept.slice(0, position).some((edit) => edit.weekStart === clear.weekStart && scopeHolds(clear.scope, edit.scope));
  return joinWeeks(kept.filter((edit, position) => edit.operation !== 'clear' || clearsSomething(edit, position)));
}

/** One change on chosen weeks of chosen rows; weeks for which `mayChange` says no are left out. */
export function editsForCells(
  scopes: readonly OverrideScope[],
  weekStarts: readonly string[],
  operation: OverrideOperation,
  value: number | null,
  mayChange: (weekStart: string) => boolean,
): PendingEdit[] {
  const weeks = weekStarts.filter(mayChange);
  return scopes.flatMap((scope) => joinWeeks(weeks.map((weekStart) => ({ scope, weekStart, operation, value }))));
}

/** A pasted rectangle as *set to* changes: one per row and run of equal values. */
export function editsForValues(
  cells: readonly { scope: OverrideScope; weekStart: string; value: number }[],
): PendingEdit[] {
  return joinWeeks(cells.map(({ scope, weekStart, value }) => ({ scope, weekStart, operation: 'set to', value })));
}

/** How a person settled one cell that somebody else had changed too. */
export interface SettledCell {
  scope: OverrideScope;
  weekStart: string;
  keep: 'yours' | 'theirs';
  /** The plan of the scope in that week as the person had it. */
  yours: number;
}

/**
 * The edits after settling: cells left to the other person lose this person's changes of that scope and week; kept ones that were a raise or a factor
 * become *set to* the value that was on screen, so that exactly what was chosen is saved. A settled scope that no edit names means every edit that
 * meets it.
 */
export function settleEdits(edits: readonly PendingEdit[], settled: readonly SettledCell[]): PendingEdit[] {
  let weeks = edits.flatMap(splitWeeks);
  for (const cell of settled) {
    const inWeek = (edit: WeekEdit) => edit.weekStart === cell.weekStart;
    const isNamed = weeks.some((edit) => inWeek(edit) && isSameScope(edit.scope, cell.scope));
    const isMeant = (edit: WeekEdit) =>
      inWeek(edit) && (isNamed ? isSameScope(edit.scope, cell.scope) : scopesMeet(edit.scope, cell.scope));
    if (cell.keep === 'theirs') {
      weeks = weeks.filter((edit) => !isMeant(edit));
      continue;
    }
    const last = weeks.findLastIndex(isMeant);
    const lastEdit = weeks[last];
    if (!isNamed || lastEdit === undefined || lastEdit.operation === 'set to' || lastEdit.operation === 'clear')
      continue;
    weeks = weeks.flatMap((edit, index) => {
      if (!isMeant(edit)) return [edit];
      return index === last ? [{ ...edit, operation: 'set to' as const, value: cell.yours }] : [];
    });
  }
  return joinWeeks(weeks);
}

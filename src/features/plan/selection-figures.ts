import type { GridColumn } from './grid-columns.ts';
import type { RowFigures } from './line-figures.ts';
import { rectangleOf, rowsThatCount, type Selection } from './selection.ts';

export interface Change {
  units: number;
  /** Of what it is measured against; null where that is zero. */
  fraction: number | null;
}

export interface SelectionFigures {
  /** Which rows and weeks, in words. */
  place: string;
  cells: number;
  sum: number;
  /** Planned cells only; null where none is selected. */
  againstModel: Change | null;
  /** Weeks that the locked version holds; null where there is none. */
  againstLocked: Change | null;
  /** Planned cells that aren't locked. */
  changeable: number;
}

const changeOf = (now: number, before: number): Change => ({
  units: now - before,
  fraction: before === 0 ? null : (now - before) / before,
});

/** Count, sum and changes of the selected cells. `lockedValues` by row position: units by weekStart in the last locked version. */
export function computeSelection(
  selection: Selection,
  rows: readonly { figures: RowFigures }[],
  columns: readonly GridColumn[],
  lockedValues: ((row: number) => ReadonlyMap<string, number>) | null,
  describe: (rows: number[], weeks: GridColumn[]) => string,
): SelectionFigures {
  const rectangle = rectangleOf(selection);
  const chosenRows = rowsThatCount(rectangle, rows.length - 1);
  const chosenColumns = columns.slice(rectangle.firstColumn, rectangle.lastColumn + 1);
  let sum = 0;
  let planned = 0;
  let model = 0;
  let plan = 0;
  let changeable = 0;
  let locked = 0;
  let planInLocked = 0;
  let inLocked = 0;
  for (const position of chosenRows) {
    const figures = rows[position]?.figures;
    if (!figures) continue;
    const ofLocked = lockedValues?.(position);
    for (const column of chosenColumns) {
      const value = column.kind === 'history' ? figures.history[column.index] : figures.plan[column.index];
      if (value === null || value === undefined || Number.isNaN(value)) continue;
      sum += value;
      if (column.kind === 'history') continue;
      planned += 1;
      plan += value;
      model += figures.model[column.index] ?? 0;
      if (!column.isLocked) changeable += 1;
      const lockedValue = ofLocked?.get(column.weekStart);
      if (lockedValue !== undefined) {
        inLocked += 1;
        locked += lockedValue;
        planInLocked += value;
      }
    }
  }
  return {
    place: describe(chosenRows, chosenColumns),
    cells: chosenRows.length * chosenColumns.length,
    sum,
    againstModel: planned > 0 ? changeOf(plan, model) : null,
    againstLocked: inLocked > 0 ? changeOf(planInLocked, locked) : null,
    changeable,
  };
}

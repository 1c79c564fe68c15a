/** A rectangle of cells: where it began (the cell in focus) and its opposite corner. Rows and columns count from 0. */
export interface CellPosition {
  row: number;
  column: number;
}
export interface Selection {
  active: CellPosition;
  head: CellPosition;
}
export interface Rectangle {
  firstRow: number;
  lastRow: number;
  firstColumn: number;
  lastColumn: number;
}
export interface GridSize {
  rows: number;
  columns: number;
}

export function selectCell(row: number, column: number): Selection {
  return { active: { row, column }, head: { row, column } };
}

export function rectangleOf({ active, head }: Selection): Rectangle {
  return {
    firstRow: Math.min(active.row, head.row),
    lastRow: Math.max(active.row, head.row),
    firstColumn: Math.min(active.column, head.column),
    lastColumn: Math.max(active.column, head.column),
  };
}

export function isOneCell({ active, head }: Selection): boolean {
  return active.row === head.row && active.column === head.column;
}

const clamp = (value: number, last: number) => Math.max(0, Math.min(last, value));

/** The selection held inside a grid that has become smaller; null where there is nothing to select. */
export function keepInside(selection: Selection, size: GridSize): Selection | null {
  if (size.rows === 0 || size.columns === 0) return null;
  const hold = ({ row, column }: CellPosition) => ({
    row: clamp(row, size.rows - 1),
    column: clamp(column, size.columns - 1),
  });
  return { active: hold(selection.active), head: hold(selection.head) };
}

export interface KeyPress {
  key: string;
  shiftKey: boolean;
  /** Control, or Command on a Mac. */
  hasCommand: boolean;
}

/**
 * The selection after a moving key; null if the key doesn't move. Shift extends. Tab walks along the row and on to the next one, and gives 'leave'
 * past the last or before the first cell, so that the keyboard is never caught.
 */
export function moveSelection(
  selection: Selection,
  press: KeyPress,
  size: GridSize,
  rowsPerPage: number,
): Selection | 'leave' | null {
  const last = { row: size.rows - 1, column: size.columns - 1 };
  if (press.key === 'Tab') {
    const step = press.shiftKey ? -1 : 1;
    const place = selection.active.row * size.columns + selection.active.column + step;
    if (place < 0 || place >= size.rows * size.columns) return 'leave';
    return selectCell(Math.floor(place / size.columns), place % size.columns);
  }
  const from = press.shiftKey ? selection.head : selection.active;
  let to: CellPosition;
  switch (press.key) {
    case 'ArrowUp':
      to = { ...from, row: press.hasCommand ? 0 : from.row - 1 };
      break;
    case 'ArrowDown':
      to = { ...from, row: press.hasCommand ? last.row : from.row + 1 };
      break;
    case 'ArrowLeft':
      to = { ...from, column: press.hasCommand ? 0 : from.column - 1 };
      break;
    case 'ArrowRight':
      to = { ...from, column: press.hasCommand ? last.column : from.column + 1 };
      break;
    case 'Home':
      to = { row: press.hasCommand ? 0 : from.row, column: 0 };
      break;
    case 'End':
      to = { row: press.hasCommand ? last.row : from.row, column: last.column };
      break;
    case 'PageUp':
      to = { ...from, row: from.row - rowsPerPage };
      break;
    case 'PageDown':
      to = { ...from, row: from.row + rowsPerPage };
      break;
    default:
      return null;
  }
  const held = { row: clamp(to.row, last.row), column: clamp(to.column, last.column) };
  return press.shiftKey ? { active: selection.active, head: held } : { active: held, head: held };
}

/** Rows of the rectangle that count and take changes: the total row only where it stands alone, since it holds the others already. */
export function rowsThatCount({ firstRow, lastRow }: Rectangle, totalRow: number): number[] {
  const rows = Array.from({ length: lastRow - firstRow + 1 }, (_, index) => firstRow + index);
  return rows.length > 1 ? rows.filter((row) => row !== totalRow) : rows;
}

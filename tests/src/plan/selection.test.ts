import { describe, expect, it } from 'vitest';
import {
  keepInside,
  moveSelection,
  rectangleOf,
  rowsThatCount,
  selectCell,
  type KeyPress,
} from '../../../src/features/plan/selection.ts';

const size = { rows: 4, columns: 5 };
const press = (key: string, options: Partial<KeyPress> = {}): KeyPress => ({
  key,
  shiftKey: false,
  hasCommand: false,
  ...options,
});

describe('moveSelection', () => {
  it('stops at the edges', () => {
    expect(moveSelection(selectCell(0, 0), press('ArrowUp'), size, 3)).toEqual(selectCell(0, 0));
    expect(moveSelection(selectCell(3, 4), press('ArrowRight'), size, 3)).toEqual(selectCell(3, 4));
    expect(moveSelection(selectCell(1, 1), press('PageDown'), size, 10)).toEqual(selectCell(3, 1));
  });

  it('extends from the cell in focus with Shift', () => {
    const once = moveSelection(selectCell(1, 1), press('ArrowRight', { shiftKey: true }), size, 3);
    expect(once).toEqual({ active: { row: 1, column: 1 }, head: { row: 1, column: 2 } });
    const twice = moveSelection(once as never, press('ArrowDown', { shiftKey: true, hasCommand: true }), size, 3);
    expect(rectangleOf(twice as never)).toEqual({ firstRow: 1, lastRow: 3, firstColumn: 1, lastColumn: 2 });
  });

  it('jumps with Control and Home, End', () => {
    expect(moveSelection(selectCell(2, 2), press('Home'), size, 3)).toEqual(selectCell(2, 0));
    expect(moveSelection(selectCell(2, 2), press('End', { hasCommand: true }), size, 3)).toEqual(selectCell(3, 4));
  });

  it('walks on to the next row with Tab and leaves after the last cell', () => {
    expect(moveSelection(selectCell(0, 4), press('Tab'), size, 3)).toEqual(selectCell(1, 0));
    expect(moveSelection(selectCell(1, 0), press('Tab', { shiftKey: true }), size, 3)).toEqual(selectCell(0, 4));
    expect(moveSelection(selectCell(3, 4), press('Tab'), size, 3)).toBe('leave');
    expect(moveSelection(selectCell(0, 0), press('Tab', { shiftKey: true }), size, 3)).toBe('leave');
  });

  it('leaves other keys alone', () => {
    expect(moveSelection(selectCell(0, 0), press('x'), size, 3)).toBeNull();
  });
});

describe('rowsThatCount', () => {
  it('leaves the total out beside other rows, since it holds them already', () => {
    expect(rowsThatCount({ firstRow: 1, lastRow: 3, firstColumn: 0, lastColumn: 0 }, 3)).toEqual([1, 2]);
  });

  it('keeps the total where it stands alone', () => {
    expect(rowsThatCount({ firstRow: 3, lastRow: 3, firstColumn: 0, lastColumn: 0 }, 3)).toEqual([3]);
  });
});

describe('keepInside', () => {
  it('pulls a selection back into a smaller grid', () => {
    expect(keepInside({ active: { row: 9, column: 1 }, head: { row: 2, column: 9 } }, size)).toEqual({
      active: { row: 3, column: 1 },
      head: { row: 2, column: 4 },
    });
  });

  it('gives nothing in an empty grid', () => {
    expect(keepInside(selectCell(0, 0), { rows: 0, columns: 5 })).toBeNull();
  });
});

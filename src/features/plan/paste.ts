import { readNumber, type DecimalMark } from './number-input.ts';

/** Rows of a rectangle on the clipboard (tab-separated, quotes doubled inside quotes, any line end). A last line end makes no row. */
export function parseRectangle(text: string): string[][] {
  const rows: string[][] = [];
  let row: string[] = [];
  let cell = '';
  let isQuoted = false;
  for (let index = 0; index < text.length; index += 1) {
    const character = text.charAt(index);
    if (isQuoted) {
      if (character !== '"') cell += character;
      else if (text[index + 1] === '"') {
        cell += '"';
        index += 1;
      } else isQuoted = false;
      continue;
    }
    if (character === '"' && cell === '') isQuoted = true;
    else if (character === '\t') {
      row.push(cell);
      cell = '';
    } else if (character === '\n' || character === '\r') {
      if (character === '\r' && text[index + 1] === '\n') index += 1;
      row.push(cell);
      rows.push(row);
      row = [];
      cell = '';
    } else cell += character;
  }
  if (cell !== '' || row.length > 0) {
    row.push(cell);
    rows.push(row);
  }
  return rows;
}

/** Tab-separated text of figures, in the person's decimal mark and without grouping, so that any spreadsheet takes them as numbers. */
export function formatRectangle(rows: readonly (readonly (number | null)[])[], mark: DecimalMark): string {
  return rows
    .map((row) => row.map((value) => (value === null ? '' : String(value).replace('.', mark))).join('\t'))
    .join('\r\n');
}

export interface UnreadableCell {
  row: number;
  column: number;
  text: string;
}

export type PasteReading =
  | { kind: 'numbers'; values: (number | null)[][] }
  | { kind: 'two-ways'; byMark: Record<DecimalMark, (number | null)[][]>; example: string }
  | { kind: 'unreadable'; cells: UnreadableCell[] };

function readAll(cells: readonly (readonly string[])[], mark: DecimalMark) {
  const unreadable: UnreadableCell[] = [];
  const values = cells.map((row, rowIndex) =>
    row.map((text, column) => {
      if (text.trim() === '') return null;
      const value = readNumber(text, mark);
      if (value === null) unreadable.push({ row: rowIndex, column, text });
      return value;
    }),
  );
  return { values, unreadable };
}

/**
 * Numbers of a pasted rectangle. One cell that can be read only one way settles the whole rectangle; where every cell can be read both ways and
 * the readings differ, both are given for the person to choose. Empty cells are null.
 */
export function readRectangle(cells: readonly (readonly string[])[], mark: DecimalMark): PasteReading {
  const own = readAll(cells, mark);
  const otherMark: DecimalMark = mark === '.' ? ',' : '.';
  const other = readAll(cells, otherMark);
  if (own.unreadable.length > 0) {
    return other.unreadable.length === 0
      ? { kind: 'numbers', values: other.values }
      : { kind: 'unreadable', cells: own.unreadable };
  }
  if (other.unreadable.length > 0) return { kind: 'numbers', values: own.values };
  for (const [rowIndex, row] of cells.entries()) {
    for (const [column, text] of row.entries()) {
      if (own.values[rowIndex]?.[column] !== other.values[rowIndex]?.[column]) {
        const byMark = { [mark]: own.values, [otherMark]: other.values } as Record<DecimalMark, (number | null)[][]>;
        return { kind: 'two-ways', byMark, example: text.trim() };
      }
    }
  }
  return { kind: 'numbers', values: own.values };
}

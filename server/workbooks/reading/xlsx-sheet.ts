import { readSerialDate } from './cell-dates.ts';
import type { CellValue, ReadingLimits, TableRow } from './table.ts';
import { UnreadableFileError } from './unreadable-file-error.ts';
import { toSuspicious } from './workbook-archive.ts';
import { readColumnLetters, type MergedRange } from './xlsx-merged-ranges.ts';
import { streamXml, unescapeText, type XmlListener } from './xml-stream.ts';

export interface SheetContext {
  name: string;
  dateStyles: boolean[];
  sharedTexts: string[];
  hasDatesFrom1904: boolean;
}

/**
 * Rows with a filled cell, in batches of one unpacked piece of the file each. The value of a merged range stands in each of its cells,
 * and the row names the columns that were filled so.
 */
export async function* streamSheetRows(
  chunks: AsyncIterable<Buffer>,
  context: SheetContext,
  mergedRanges: MergedRange[],
  limits: ReadingLimits,
): AsyncGenerator<TableRow[]> {
  let batch: TableRow[] = [];
  const fillMerged = buildMergedFiller(mergedRanges, limits);
  const listener = buildRowListener(context, limits, fillMerged, (row) => batch.push(row));
  for await (const _piece of streamXml(chunks, listener, limits)) {
    void _piece;
    if (batch.length > 0) {
      yield batch;
      batch = [];
    }
  }
}

function buildRowListener(
  context: SheetContext,
  limits: ReadingLimits,
  fillMerged: (row: TableRow) => number,
  keep: (row: TableRow) => void,
): XmlListener {
  let row: TableRow = { sheet: context.name, row: 0, cells: [] };
  let column = -1;
  let type = '';
  let style = 0;
  let value = '';
  let isInCell = false;
  let isInValue = false;
  let isInPhonetic = false;
  let hasValue = false;
  let hasFormula = false;
  let cellCount = 0;

  const countCells = (cells: number) => {
    cellCount += cells;
    if (cellCount > limits.cells) {
      throw new UnreadableFileError(
        'too-large',
        `The sheet “${context.name}” has more than ${Math.round(limits.cells / 1e6)} million cells. Split it by year or by category.`,
      );
    }
  };

  const endCell = () => {
    isInCell = false;
    if (!hasValue) {
      if (hasFormula) (row.uncomputed ??= []).push(column);
      return;
    }
    const read = readCell(type, value, context.dateStyles[style] ?? false, context);
    if (read === null) return;
    if (column >= limits.columns) {
      throw new UnreadableFileError(
        'too-large',
        `The sheet “${context.name}” has cells beyond column ${limits.columns}. Delete what stands to the right of the table and save it again.`,
      );
    }
    while (row.cells.length < column) row.cells.push(null);
    row.cells[column] = read;
    countCells(1);
  };

  return {
    open: (name, attributes) => {
      switch (name) {
        case 'c': {
          const reference = attributes.r;
          column = reference === undefined ? column + 1 : readColumnLetters(reference);
          if (column < 0) throw toSuspicious('A cell has no place.');
          type = attributes.t ?? 'n';
          style = attributes.s === undefined ? 0 : Number(attributes.s);
          value = '';
          isInCell = true;
          hasValue = false;
          hasFormula = false;
          break;
        }
        case 'v':
          isInValue = isInCell;
          hasValue = true;
          break;
        case 't':
          isInValue = isInCell && !isInPhonetic;
          hasValue = true;
          break;
        case 'f':
          hasFormula = true;
          break;
        case 'rPh':
          isInPhonetic = true;
          break;
        case 'row': {
          const number = attributes.r === undefined ? row.row + 1 : Number(attributes.r);
          if (!(number > row.row)) throw toSuspicious('Its rows are out of order.');
          row = { sheet: context.name, row: number, cells: [] };
          column = -1;
          break;
        }
      }
    },
    close: (name) => {
      switch (name) {
        case 'v':
        case 't':
          isInValue = false;
          break;
        case 'rPh':
          isInPhonetic = false;
          break;
        case 'c':
          endCell();
          break;
        case 'row':
          countCells(fillMerged(row));
          if (row.cells.length > 0 || row.uncomputed) keep(row);
          break;
      }
    },
    text: (text) => {
      if (isInValue) value += text;
    },
  };
}

function readCell(type: string, value: string, isDate: boolean, context: SheetContext): CellValue {
  switch (type) {
    case 's': {
      const text = context.sharedTexts[Number(value)];
      if (text === undefined) throw toSuspicious('A cell points to a text that isn’t there.');
      return text === '' ? null : text;
    }
    case 'inlineStr':
    case 'str':
      return value === '' ? null : unescapeText(value);
    case 'b':
      return value === '1' || value === 'true';
    case 'e':
      return value === '' ? null : value;
    case 'd':
      return /^\d{4}-\d{2}-\d{2}/.test(value) ? { date: value.slice(0, 10) } : value;
    default: {
      if (value === '') return null;
      const number = Number(value);
      if (!Number.isFinite(number)) throw toSuspicious('A number in it is none.');
      if (!isDate) return number;
      const date = readSerialDate(number, context.hasDatesFrom1904);
      return date === null ? number : { date };
    }
  }
}

/** Carries the value in a merged range's corner to the range's other cells; returns how many cells it filled. */
function buildMergedFiller(ranges: MergedRange[], limits: ReadingLimits): (row: TableRow) => number {
  let next = 0;
  let active: { range: MergedRange; value: CellValue }[] = [];
  return (row) => {
    for (let range = ranges[next]; range && range.firstRow <= row.row; range = ranges[next]) {
      next += 1;
      const value = range.firstRow === row.row ? (row.cells[range.firstColumn] ?? null) : null;
      if (value !== null) active.push({ range, value });
    }
    active = active.filter(({ range }) => range.lastRow >= row.row);
    let filled = 0;
    for (const { range, value } of active) {
      const lastColumn = Math.min(range.lastColumn, limits.columns - 1);
      for (let column = range.firstColumn; column <= lastColumn; column += 1) {
        if (row.row === range.firstRow && column === range.firstColumn) continue;
        while (row.cells.length < column) row.cells.push(null);
        row.cells[column] = value;
        (row.merged ??= []).push(column);
        filled += 1;
      }
    }
    return filled;
  };
}

import { matchHeaderName } from './header-words.ts';
import type { CellValue, TableRow } from './table.ts';

export interface FoundHeader {
  /** 1-based, as `TableRow.row`. */
  row: number;
  /** By column; empty text where the header has no name. */
  names: string[];
}

const ROWS_SEARCHED = 60;

/**
 * The row that names the columns, among the first rows of a sheet: at least two texts, all different, filled about as wide as the
 * rows below it, and speaking the words of the trade. Null if no row is like that.
 */
export function findHeader(rows: readonly TableRow[]): FoundHeader | null {
  let best: { header: FoundHeader; score: number } | null = null;
  const searched = rows.slice(0, ROWS_SEARCHED);
  searched.forEach((row, index) => {
    const score = scoreRow(row, searched.slice(index + 1, index + 11));
    if (score !== null && (best === null || score > best.score)) {
      best = { header: { row: row.row, names: row.cells.map(nameOf) }, score };
    }
  });
  return (best as { header: FoundHeader } | null)?.header ?? null;
}

function scoreRow(row: TableRow, below: readonly TableRow[]): number | null {
  const own = row.cells.map((cell, column) => (row.merged?.includes(column) ? '' : nameOf(cell)));
  const names = own.filter((name) => name !== '');
  const texts = row.cells.filter((cell): cell is string => typeof cell === 'string' && !/^[\d\s.,%-]+$/.test(cell));
  if (names.length < 2 || texts.length < 2) return null;
  const distinct = new Set(names.map((name) => name.toLowerCase())).size;
  const known = names.filter((name) => matchHeaderName(name).length > 0).length;
  const widths = below.map((other) => other.cells.filter((cell) => cell !== null).length);
  const isWideEnough = widths.length === 0 || names.length >= 0.6 * Math.max(...widths);
  const tooLong = names.filter((name) => name.length > 60).length;
  return (
    2.5 * known +
    0.5 * distinct -
    (names.length - distinct) -
    (names.length - texts.length) -
    2 * tooLong +
    (isWideEnough ? 2 : -3)
  );
}

function nameOf(cell: CellValue | undefined): string {
  if (cell === null || cell === undefined) return '';
  if (typeof cell === 'object') return cell.date;
  return String(cell).replace(/\s+/g, ' ').trim();
}

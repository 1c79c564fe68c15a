/** A calendar date in a cell, `YYYY-MM-DD`; a time of day beside it is dropped. */
export interface CellDate {
  date: string;
}

/** Empty is null, never an empty text. Formula cells carry their stored value, error cells their text (`#N/A`). */
export type CellValue = null | string | number | boolean | CellDate;

export interface TableRow {
  sheet: string;
  /** 1-based, as the spreadsheet program shows it; for text files the record's number. */
  row: number;
  /** By column from A on, as long as the last filled cell. */
  cells: CellValue[];
  /** Columns (0-based) whose value stands only once in the file, in a merged range that starts elsewhere. */
  merged?: number[];
  /** Columns (0-based) that hold a formula without a stored value; their cell is null. */
  uncomputed?: number[];
}

export interface TableSheet {
  name: string;
  /** Rows with at least one filled cell, in batches, read anew from the file on each call. Throws UnreadableFileError. */
  batches(): AsyncGenerator<TableRow[]>;
  /** The same rows one by one. */
  rows(): AsyncGenerator<TableRow>;
}

export interface SkippedSheet {
  name: string;
  reason: 'hidden' | 'no cells';
}

export interface OpenedTable {
  format: 'xlsx' | 'csv' | 'tsv';
  sheets: TableSheet[];
  skippedSheets: SkippedSheet[];
  /** Bare serial numbers count from 1904 in this workbook. */
  hasDatesFrom1904: boolean;
  close(): Promise<void>;
}

/** Caps that keep a hostile file from eating the machine. */
export interface ReadingLimits {
  fileBytes: number;
  /** Parts inside a workbook. */
  entries: number;
  /** Bytes of all parts that are read, unpacked. */
  unpackedBytes: number;
  /** Unpacked ÷ packed bytes of a part, looked at from `ratioFromBytes` unpacked on. */
  ratio: number;
  ratioFromBytes: number;
  /** Characters in the table of shared texts, held in memory. */
  sharedTextCharacters: number;
  cells: number;
  columns: number;
  sheets: number;
  /** Characters without an element or a row's end: one text, one tag or one comment. */
  unbrokenCharacters: number;
}

export const DEFAULT_LIMITS: ReadingLimits = {
  fileBytes: 400 * 1024 * 1024,
  entries: 5_000,
  unpackedBytes: 4 * 1024 * 1024 * 1024,
  ratio: 150,
  ratioFromBytes: 4 * 1024 * 1024,
  sharedTextCharacters: 48_000_000,
  cells: 60_000_000,
  columns: 2_000,
  sheets: 200,
  unbrokenCharacters: 2_000_000,
};

/** `A`, `B`, … `AA` of a 0-based column. */
export function nameColumn(column: number): string {
  let name = '';
  for (let rest = column + 1; rest > 0; rest = Math.floor((rest - 1) / 26)) {
    name = String.fromCharCode(65 + ((rest - 1) % 26)) + name;
  }
  return name;
}

export async function* flattenBatches(batches: AsyncIterable<TableRow[]>): AsyncGenerator<TableRow> {
  for await (const batch of batches) yield* batch;
}

import type { Writable } from 'node:stream';
import ExcelJS from 'exceljs';
import { nameColumn } from '../reading/table.ts';

/** ECMA-376 part 1, §18.3.1.63. */
const A4 = 9 as unknown as ExcelJS.PaperSize;

/** A cell to write: its value and style. A formula comes with the result it must have. */
export interface PackCell {
  value: string | number | Date | { formula: string; result: number } | null;
  style: Partial<ExcelJS.Style>;
}

export interface SheetLayout {
  /** Widths in characters. */
  widths: number[];
  /** Columns and rows that stay in view and are repeated on each printed page. */
  frozenColumns: number;
  frozenRows: number;
  /** First repeated row, 1-based; frozen rows above it are printed once. */
  titleRow?: number;
  orientation: 'portrait' | 'landscape';
  /** Printed pages side by side; 1 if not said. */
  pagesWide?: number;
  footer: string;
}

/** Rows of a sheet, written one after another and kept by nobody. */
export class PackSheet {
  private readonly sheet: ExcelJS.Worksheet;
  private row = 0;

  constructor(workbook: ExcelJS.stream.xlsx.WorkbookWriter, name: string, layout: SheetLayout) {
    const { frozenColumns, frozenRows } = layout;
    this.sheet = workbook.addWorksheet(name, {
      properties: { defaultRowHeight: 15 },
      views: [
        {
          state: frozenColumns + frozenRows > 0 ? 'frozen' : 'normal',
          xSplit: frozenColumns,
          ySplit: frozenRows,
          showGridLines: false,
        },
      ],
      pageSetup: {
        paperSize: A4,
        orientation: layout.orientation,
        fitToPage: true,
        fitToWidth: layout.pagesWide ?? 1,
        fitToHeight: 0,
        margins: { left: 0.5, right: 0.5, top: 0.6, bottom: 0.7, header: 0.3, footer: 0.35 },
        ...(frozenRows > 0 ? { printTitlesRow: `${layout.titleRow ?? 1}:${frozenRows}` } : {}),
        ...(frozenColumns > 0 ? { printTitlesColumn: `A:${nameColumn(frozenColumns - 1)}` } : {}),
      },
      headerFooter: { oddFooter: `&L&8${escapeFooter(layout.footer)}&R&8&A, page &P of &N` },
    });
    this.sheet.columns = layout.widths.map((width) => ({ width }));
  }

  /** Number of the row written last. */
  get lastRow(): number {
    return this.row;
  }

  /** Writes the next row from column A on and returns its number. */
  write(cells: readonly (PackCell | null)[], height?: number): number {
    this.row += 1;
    const row = this.sheet.getRow(this.row);
    cells.forEach((cell, index) => {
      if (!cell) return;
      const target = row.getCell(index + 1);
      target.value = typeof cell.value === 'string' ? cleanText(cell.value) : cell.value;
      target.style = cell.style;
    });
    if (height !== undefined) row.height = height;
    row.commit();
    return this.row;
  }

  /** A row whose one text runs over the columns up to `lastColumn` (1-based). */
  writeAcross(cell: PackCell, lastColumn: number, height?: number): number {
    const row = this.row + 1;
    this.sheet.mergeCells(row, 1, row, lastColumn);
    return this.write([cell], height);
  }

  /** Writes a row whose last text runs on over the columns up to `lastColumn` (1-based). */
  writeLastAcross(cells: readonly PackCell[], lastColumn: number, height?: number): number {
    if (cells.length < lastColumn) this.sheet.mergeCells(this.row + 1, cells.length, this.row + 1, lastColumn);
    return this.write(cells, height);
  }

  skip(): void {
    this.write([]);
  }

  finish(): void {
    this.sheet.commit();
  }
}

export function startWorkbook(
  stream: Writable,
  about: { title: string; author: string; at: Date },
): ExcelJS.stream.xlsx.WorkbookWriter {
  const workbook = new ExcelJS.stream.xlsx.WorkbookWriter({ stream, useStyles: true, useSharedStrings: true });
  workbook.creator = about.author;
  workbook.lastModifiedBy = about.author;
  workbook.created = about.at;
  workbook.modified = about.at;
  workbook.title = about.title;
  return workbook;
}

/**
 * A text as a cell can hold it: line ends are line feeds, characters that no XML may carry go, what looks like an escape of the format
 * (`_x000D_`) is kept as written, and what exceeds a cell's 32,767 characters is cut.
 */
function cleanText(text: string): string {
  return (
    text
      .replace(/\r\n?/g, '\n')
      // eslint-disable-next-line no-control-regex -- control characters are exactly what must not get into the file
      .replace(/[\u0000-\u0008\u000b\u000c\u000e-\u001f\ufffe\uffff]/g, '')
      .replace(/_(?=x[0-9A-Fa-f]{4}_)/g, '_x005F_')
      .slice(0, 32_767)
  );
}

/** `&` begins a code in headers and footers. */
function escapeFooter(text: string): string {
  return text.replace(/&/g, '&&').replace(/\s+/g, ' ').slice(0, 180);
}

/** A sheet's name inside a formula. */
export function quoteSheet(name: string): string {
  return `'${name.replace(/'/g, "''")}'`;
}

/** `D6:D17`, columns 0-based, rows 1-based. */
export function nameRange(firstColumn: number, firstRow: number, lastColumn: number, lastRow: number): string {
  return `${nameColumn(firstColumn)}${firstRow}:${nameColumn(lastColumn)}${lastRow}`;
}

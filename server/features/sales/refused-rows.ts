import Papa from 'papaparse';
import type { RefusedRow } from './imports.repository.ts';

/**
 * CSV (RFC 4180, UTF-8 with byte order mark) of refused rows: sheet, row, cell and reason before the row's own columns. Texts that a spreadsheet
 * program would run as a formula get an apostrophe in front; numbers stay numbers, negative ones too.
 */
export function writeRefusedRows(headers: readonly string[], rows: readonly RefusedRow[]): string {
  const width = Math.max(headers.length, ...rows.map(({ rowValues }) => rowValues?.length ?? 0));
  const head = ['sheet', 'row', 'cell', 'reason', ...Array.from({ length: width }, (_, index) => headers[index] ?? '')];
  const records = rows.map(({ sheet, row, cell, detail, rowValues }) => [
    sheet ?? '',
    row === null ? '' : String(row),
    cell ?? '',
    detail,
    ...Array.from({ length: width }, (_, index) => rowValues?.[index] ?? ''),
  ]);
  const defused = [head, ...records].map((record) => record.map(defuse));
  return `\uFEFF${Papa.unparse(defused, { newline: '\r\n' })}\r\n`;
}

function defuse(text: string): string {
  const isNumber = /^[+-]?\d+([.,]\d+)*$/.test(text);
  return !isNumber && /^[=+\-@\t\r]/.test(text) ? `'${text}` : text;
}

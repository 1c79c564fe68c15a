import type { GridColumn } from './grid-columns.ts';
import type { GridViewRow } from './grid-table.ts';
import type { DecimalMark } from './number-input.ts';

/** Text that a spreadsheet would run as a formula gets an apostrophe before it; what would break the cell apart is quoted. */
function writeText(text: string, separator: string): string {
  const safe = /^[=+\-@\t\r]/.test(text) ? `'${text}` : text;
  return safe.includes(separator) || /["\r\n]/.test(safe) ? `"${safe.replaceAll('"', '""')}"` : safe;
}

/**
 * The grid as a CSV file: one row per row on screen, one column per week, with a byte-order mark and the separator that goes with the person's decimal
 * mark, so that a spreadsheet opens it as it stands. Weeks of history and planned weeks are told apart in the second row.
 */
export function writeGridCsv(
  rows: readonly Pick<GridViewRow, 'name' | 'figures'>[],
  columns: readonly GridColumn[],
  words: { corner: string; sold: string; planned: string },
  mark: DecimalMark,
): string {
  const separator = mark === ',' ? ';' : ',';
  const text = (value: string) => writeText(value, separator);
  const lines = [
    [text(words.corner), ...columns.map(({ fullLabel }) => fullLabel)],
    ['', ...columns.map(({ kind }) => text(kind === 'history' ? words.sold : words.planned))],
    ...rows.map(({ name, figures }) => [
      text(name),
      ...columns.map(({ kind, index }) => {
        const value = kind === 'history' ? figures.history[index] : figures.plan[index];
        return value === null || value === undefined || Number.isNaN(value) ? '' : String(value).replace('.', mark);
      }),
    ]),
  ];
  return `\ufeff${lines.map((cells) => cells.join(separator)).join('\r\n')}\r\n`;
}

/** Hands a text to the browser as a file. */
export function downloadText(fileName: string, text: string): void {
  const address = URL.createObjectURL(new Blob([text], { type: 'text/csv;charset=utf-8' }));
  const link = document.createElement('a');
  link.href = address;
  link.download = fileName;
  link.click();
  setTimeout(() => URL.revokeObjectURL(address), 10_000);
}

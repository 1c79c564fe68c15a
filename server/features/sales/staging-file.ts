import { createWriteStream, type WriteStream } from 'node:fs';
import { once } from 'node:events';
import type { ImportRow } from '../../workbooks/reading/import-rows.ts';

/** Columns of the rows that wait for the database, in the order in which they are written. */
export const stagedColumns = [
  'file_row',
  'item_position',
  'location_position',
  'week_start',
  'units',
  'net_value',
  'price',
  'regular_price',
  'depth',
  'feature',
  'display',
  'mechanics',
  'gap',
  'days_open',
  'promotion_name',
] as const;

/**
 * Rows on disk in PostgreSQL's COPY text format: they are read once outside any transaction, and poured into the database at full speed inside it.
 * Memory stays the same however long the file is.
 */
export class StagingFile {
  readonly path: string;
  private readonly stream: WriteStream;

  constructor(path: string) {
    this.path = path;
    this.stream = createWriteStream(path, { highWaterMark: 1 << 20 });
  }

  async append(rows: readonly { row: ImportRow; item: number; location: number }[]): Promise<void> {
    if (rows.length === 0) return;
    let text = '';
    for (const { row, item, location } of rows) text += formatRow(row, item, location);
    if (!this.stream.write(text)) await once(this.stream, 'drain');
  }

  async close(): Promise<void> {
    this.stream.end();
    await once(this.stream, 'close');
  }
}

function formatRow(row: ImportRow, item: number, location: number): string {
  return `${row.row}\t${item}\t${location}\t${row.weekStart}\t${number(row.units)}\t${number(row.netValue)}\t${number(row.price)}\t${number(
    row.regularPrice,
  )}\t${number(row.depth)}\t${number(row.feature)}\t${number(row.display)}\t${shares(row.mechanics)}\t${number(row.gap)}\t${number(
    row.daysOpen,
  )}\t${text(row.promotionName)}\n`;
}

function number(value: number | undefined): string {
  return value === undefined ? '\\N' : String(value);
}

function shares(mechanics: Readonly<Record<string, number>>): string {
  for (const _name in mechanics) return text(JSON.stringify(mechanics));
  return '\\N';
}

/** Escapes of COPY's text format (PostgreSQL manual, COPY, "Text Format"); a zero byte can't be stored at all. */
function text(value: string | undefined): string {
  if (value === undefined) return '\\N';
  return value
    .replaceAll('\u0000', '')
    .replaceAll('\\', '\\\\')
    .replaceAll('\n', '\\n')
    .replaceAll('\r', '\\r')
    .replaceAll('\t', '\\t');
}

import { shareMeanings, type ColumnMeaning } from '../../../shared/domain/column-meanings.ts';
import { addDays, addWeeks, toDayNumber, weekdayOf } from '../../../shared/domain/weeks.ts';
import type { ImportMapping, ReadingForm } from './inspect-table.ts';
import type { ImportKind, MappedColumn } from './mapping.ts';
import { readNumber, readShare } from './number-reading.ts';
import { nameColumn, type CellValue, type OpenedTable, type TableRow } from './table.ts';
import { UnreadableFileError } from './unreadable-file-error.ts';
import { readWeekCell, resolveWeekStart } from './week-reading.ts';

export interface ImportRow {
  sheet: string;
  /** 1-based row of the file. */
  row: number;
  /** `YYYY-MM-DD`. */
  weekStart: string;
  category?: string;
  line?: string;
  item: string;
  itemName?: string;
  /** `All` where the file has no locations. */
  location: string;
  units?: number;
  netValue?: number;
  /** Paid per unit. */
  price?: number;
  regularPrice?: number;
  /** Shares of 0…1. */
  depth?: number;
  feature?: number;
  display?: number;
  mechanics: Record<string, number>;
  gap?: number;
  daysOpen?: number;
  promotionName?: string;
}

export type FindingKind =
  | 'week-unreadable'
  | 'week-off-weekday'
  | 'week-too-early'
  | 'week-too-late'
  | 'month-not-week'
  | 'item-missing'
  | 'location-missing'
  | 'units-missing'
  | 'nothing-planned'
  | 'number-unreadable'
  | 'negative-price'
  | 'share-outside'
  | 'days-outside'
  | 'text-too-long'
  | 'duplicate-row'
  | 'subtotal-row'
  | 'repeated-header'
  | 'merged-figure'
  | 'formula-without-value'
  | 'number-from-text'
  | 'negative-units'
  | 'zero-price'
  | 'more-of-these';

/** Something about one row that a person should know. `refused` rows aren't taken; `repaired` and `noticed` ones are. */
export interface ImportFinding {
  sheet: string;
  /** `C17`; the first cell of the row where no one cell is to blame. */
  cell: string;
  row: number;
  kind: FindingKind;
  /** The cell as it stands in the file. */
  before: string | null;
  /** What was taken instead; null where nothing was. */
  after: string | null;
  verdict: 'refused' | 'repaired' | 'noticed';
  /** A sentence for the person. */
  detail: string;
}

export interface ImportTotals {
  rowsTaken: number;
  rowsRefused: number;
  weeks: number;
  items: number;
  locations: number;
  /** Null where the file has no such column. */
  units: number | null;
  netValue: number | null;
  firstWeek: string | null;
  lastWeek: string | null;
  findings: Partial<Record<FindingKind, number>>;
}

export interface ImportRowsOptions {
  kind: ImportKind;
  form: ReadingForm;
  /** `YYYY-MM-DD`; weeks more than three years after it are refused. */
  today: string;
}

export interface ImportReading {
  /** Parsed rows and findings in file order. Can be run once. Throws UnreadableFileError. */
  batches(): AsyncGenerator<{ rows: ImportRow[]; findings: ImportFinding[] }>;
  /** What has been read so far; complete once `batches` has ended. */
  totals(): ImportTotals;
}

const FIRST_DAY = '1980-01-01';
const WEEKS_AHEAD = 157;
const LONGEST_TEXT = 200;
/** Findings about rows that are taken all the same are told one by one up to here, then counted. */
const MOST_HARMLESS_FINDINGS = 100;
const NO_LOCATION = 'All';
const TOTAL_WORDS = /^\s*(grand|sub)?[\s-]*totals?\b|^\s*(sum|all items|overall)\s*:?\s*$/i;

/**
 * Applies a mapping to every row of a table. A row that can't be taken yields one finding with the reason and nothing else; no row is
 * guessed. Rows of one item, location and week may stand in the file once; later ones are refused.
 * Memory grows by some four bytes for each week of a series, whatever the size of the file.
 */
export function readImportRows(table: OpenedTable, mapping: ImportMapping, options: ImportRowsOptions): ImportReading {
  const columns = arrangeColumns(mapping.columns);
  const counter = new TotalsCounter(columns);
  const seen = new SeenKeys();
  const weekCache = new Map<string, string | RowRefusal>();
  const lastDay = addWeeks(options.today, WEEKS_AHEAD);

  async function* batches() {
    for (const { name, headerRow } of mapping.sheets) {
      const sheet = table.sheets.find((other) => other.name === name);
      if (!sheet) {
        throw new UnreadableFileError(
          'damaged',
          `The sheet “${name}” isn't in the file any more. Send the file again.`,
        );
      }
      let headerCells: CellValue[] = [];
      for await (const batch of sheet.batches()) {
        const rows: ImportRow[] = [];
        const findings: ImportFinding[] = [];
        for (const row of batch) {
          if (row.row === headerRow) headerCells = row.cells;
          if (row.row <= headerRow) continue;
          const reader = new RowReader(row, columns, options, { table, weekCache, lastDay, headerCells });
          const outcome = reader.read();
          const duplicate = 'item' in outcome ? refuseDuplicate(seen, outcome, reader) : null;
          if (duplicate || !('item' in outcome)) {
            const finding = duplicate ?? (outcome as ImportFinding);
            counter.refuse(finding);
            findings.push(finding);
          } else {
            counter.take(outcome);
            for (const finding of reader.harmless) if (counter.isStillTold(finding)) findings.push(finding);
            rows.push(outcome);
          }
        }
        if (rows.length > 0 || findings.length > 0) yield { rows, findings };
      }
    }
    const rest = counter.tellUntold();
    if (rest.length > 0) yield { rows: [], findings: rest };
  }
  return { batches, totals: () => counter.totals() };
}

interface ColumnPlaces {
  of: Map<ColumnMeaning, MappedColumn>;
  mechanics: (MappedColumn & { mechanic: string })[];
}

function arrangeColumns(mapped: readonly MappedColumn[]): ColumnPlaces {
  const of = new Map<ColumnMeaning, MappedColumn>();
  const mechanics: ColumnPlaces['mechanics'] = [];
  for (const column of mapped) {
    if (column.meaning === 'mechanic') mechanics.push({ ...column, mechanic: column.mechanic ?? 'other' });
    else if (column.meaning !== 'ignore') of.set(column.meaning, column);
  }
  return { of, mechanics };
}

interface RowRefusal {
  column: number | null;
  kind: FindingKind;
  detail: string;
}

class RowRefused extends Error {
  readonly refusal: RowRefusal;

  constructor(refusal: RowRefusal) {
    super(refusal.detail);
    this.refusal = refusal;
  }
}

interface RowContext {
  table: OpenedTable;
  weekCache: Map<string, string | RowRefusal>;
  lastDay: string;
  headerCells: CellValue[];
}

class RowReader {
  readonly harmless: ImportFinding[] = [];
  private readonly row: TableRow;
  private readonly columns: ColumnPlaces;
  private readonly options: ImportRowsOptions;
  private readonly context: RowContext;

  constructor(row: TableRow, columns: ColumnPlaces, options: ImportRowsOptions, context: RowContext) {
    this.row = row;
    this.columns = columns;
    this.options = options;
    this.context = context;
  }

  read(): ImportRow | ImportFinding {
    try {
      return this.readRow();
    } catch (error) {
      if (error instanceof RowRefused) return this.report(error.refusal, 'refused', null);
      throw error;
    }
  }

  report(refusal: RowRefusal, verdict: ImportFinding['verdict'], after: string | null): ImportFinding {
    const column = refusal.column ?? 0;
    return {
      sheet: this.row.sheet,
      cell: `${nameColumn(column)}${this.row.row}`,
      row: this.row.row,
      kind: refusal.kind,
      before: refusal.column === null ? null : showCell(this.row.cells[column] ?? null),
      after,
      verdict,
      detail: refusal.detail,
    };
  }

  private readRow(): ImportRow {
    this.refuseDecoration();
    const weekStart = this.readWeek();
    const item = this.readText('item') ?? this.refuse('item', 'item-missing', 'The row names no item.');
    const hasLocations = this.columns.of.has('location');
    const location = this.readText('location');
    if (hasLocations && location === undefined && this.options.kind === 'sales') {
      this.refuse('location', 'location-missing', 'The row names no location, though the file has a column for it.');
    }
    const row: ImportRow = {
      sheet: this.row.sheet,
      row: this.row.row,
      weekStart,
      item,
      location: location ?? NO_LOCATION,
      mechanics: {},
    };
    for (const meaning of ['category', 'line', 'itemName', 'promotionName'] as const) {
      const text = this.readText(meaning);
      if (text !== undefined) row[meaning] = text;
    }
    this.readFigures(row);
    this.checkFigures(row);
    return row;
  }

  /** Rows that only dress the table: totals, and headers repeated on a new printed page. */
  private refuseDecoration(): void {
    const weekColumn = this.columns.of.get('week')?.column;
    const itemColumn = this.columns.of.get('item')?.column;
    const { cells } = this.row;
    const week = weekColumn === undefined ? null : (cells[weekColumn] ?? null);
    const item = itemColumn === undefined ? null : (cells[itemColumn] ?? null);
    if (
      (week === null || item === null || typeof week === 'string') &&
      cells.some((cell) => typeof cell === 'string' && TOTAL_WORDS.test(cell))
    ) {
      const isNamed = typeof week === 'string' && !TOTAL_WORDS.test(week) && item !== null;
      if (!isNamed)
        throw new RowRefused({
          column: null,
          kind: 'subtotal-row',
          detail: 'A total of other rows; left out so that nothing counts twice.',
        });
    }
    const header = this.context.headerCells;
    if (
      typeof week === 'string' &&
      weekColumn !== undefined &&
      week === header[weekColumn] &&
      item === header[itemColumn ?? -1]
    ) {
      throw new RowRefused({
        column: weekColumn,
        kind: 'repeated-header',
        detail: 'The column names once more; left out.',
      });
    }
  }

  private readWeek(): string {
    const column = this.columns.of.get('week')?.column ?? 0;
    const cell = this.row.cells[column] ?? null;
    const key = cell !== null && typeof cell === 'object' ? `date ${cell.date}` : `${typeof cell} ${String(cell)}`;
    let known = this.context.weekCache.get(key);
    if (known === undefined) {
      known = this.resolveWeek(cell, column);
      if (this.context.weekCache.size < 20_000) this.context.weekCache.set(key, known);
    }
    if (typeof known === 'string') return known;
    throw new RowRefused(known);
  }

  private resolveWeek(cell: CellValue, column: number): string | RowRefusal {
    const { form } = this.options;
    const read = readWeekCell(cell, { ...form, hasDatesFrom1904: this.context.table.hasDatesFrom1904 });
    if (read.type === 'unreadable') {
      const detail =
        cell === null
          ? 'The row has no week.'
          : `“${showCell(cell)}” can't be read as a week. Write 2026-W49, or the date of the ${form.weekDateIs === 'first-day' ? 'first' : 'last'} day of the week.`;
      return { column, kind: 'week-unreadable', detail };
    }
    if (read.type === 'month') {
      return {
        column,
        kind: 'month-not-week',
        detail: `“${showCell(cell)}” is a month. Only weekly figures are taken.`,
      };
    }
    const weekStart = resolveWeekStart(read, form);
    if (weekStart === null) {
      const day = form.weekDateIs === 'first-day' ? form.firstWeekday : (form.firstWeekday + 6) % 7;
      const own = read.type === 'date' ? nameWeekday(weekdayOf(read.date)) : '';
      const edge = form.weekDateIs === 'first-day' ? 'first' : 'last';
      return {
        column,
        kind: 'week-off-weekday',
        detail: `${showCell(cell)} is a ${own}; the ${edge} day of the trading week is a ${nameWeekday(day)}.`,
      };
    }
    if (weekStart < FIRST_DAY)
      return { column, kind: 'week-too-early', detail: 'The week lies before 1980. Check the date.' };
    if (weekStart > this.context.lastDay) {
      return { column, kind: 'week-too-late', detail: 'The week lies more than three years ahead. Check the date.' };
    }
    return weekStart;
  }

  private readText(meaning: ColumnMeaning): string | undefined {
    const column = this.columns.of.get(meaning)?.column;
    if (column === undefined) return undefined;
    const cell = this.row.cells[column] ?? null;
    if (cell === null) {
      if (this.row.uncomputed?.includes(column)) this.refuseUncomputed(column);
      return undefined;
    }
    const text = readCellText(cell);
    if (text.length > LONGEST_TEXT) {
      throw new RowRefused({
        column,
        kind: 'text-too-long',
        detail: `The text is longer than ${LONGEST_TEXT} characters.`,
      });
    }
    return text === '' ? undefined : text;
  }

  private readFigures(row: ImportRow): void {
    for (const meaning of [
      'units',
      'netValue',
      'price',
      'regularPrice',
      'daysOpen',
      'depth',
      'feature',
      'display',
      'gap',
    ] as const) {
      const column = this.columns.of.get(meaning);
      const value = column === undefined ? undefined : this.readFigure(column);
      if (value !== undefined) row[meaning] = value;
    }
    for (const column of this.columns.mechanics) {
      const value = this.readFigure(column);
      if (value !== undefined) row.mechanics[column.mechanic] = value;
    }
  }

  private readFigure({ column, meaning, scale }: MappedColumn): number | undefined {
    const cell = this.row.cells[column] ?? null;
    if (cell === null) {
      if (this.row.uncomputed?.includes(column)) this.refuseUncomputed(column);
      return undefined;
    }
    if (this.row.merged?.includes(column)) {
      const detail =
        'The figure stands in a merged cell over several rows, so no row has its own. Unmerge the cells and fill each row.';
      throw new RowRefused({ column, kind: 'merged-figure', detail });
    }
    const isShare = shareMeanings.includes(meaning);
    const { decimalSign } = this.options.form;
    const reading = isShare ? readShare(cell, decimalSign, scale ?? 'fraction') : readNumber(cell, decimalSign);
    if (reading === null) return undefined;
    if (reading === 'unreadable') {
      throw new RowRefused({ column, kind: 'number-unreadable', detail: `“${showCell(cell)}” isn't a number.` });
    }
    if (isShare && (reading.value < 0 || reading.value > 1)) {
      const detail = `${showCell(cell)} lies outside 0 to 1 (0 % to 100 %).`;
      throw new RowRefused({ column, kind: 'share-outside', detail });
    }
    if (reading.isFromText && typeof cell === 'string' && this.context.table.format === 'xlsx' && !isShare) {
      const refusal: RowRefusal = {
        column,
        kind: 'number-from-text',
        detail: 'A number stored as text; taken as a number.',
      };
      this.harmless.push(this.report(refusal, 'repaired', String(reading.value)));
    }
    return reading.value;
  }

  private checkFigures(row: ImportRow): void {
    for (const meaning of ['price', 'regularPrice'] as const) {
      const value = row[meaning];
      if (value !== undefined && value < 0) this.refuse(meaning, 'negative-price', 'A price can’t be below zero.');
      if (value === 0)
        this.notice(meaning, 'zero-price', 'The price is zero; the row is taken, but its price won’t be used.');
    }
    if (row.daysOpen !== undefined && (row.daysOpen < 0 || row.daysOpen > 7)) {
      this.refuse('daysOpen', 'days-outside', 'A week has 0 to 7 open days.');
    }
    if (this.options.kind === 'sales') {
      if (row.units === undefined) this.refuse('units', 'units-missing', 'The row has no units.');
      else if (row.units < 0) this.notice('units', 'negative-units', 'More came back than was sold; taken as it is.');
      return;
    }
    const isPlanned =
      row.price !== undefined ||
      row.regularPrice !== undefined ||
      row.depth !== undefined ||
      row.feature !== undefined ||
      row.display !== undefined ||
      row.promotionName !== undefined ||
      Object.keys(row.mechanics).length > 0;
    if (!isPlanned) this.refuse('week', 'nothing-planned', 'The row holds neither a price nor a promotion.');
  }

  private notice(meaning: ColumnMeaning, kind: FindingKind, detail: string): void {
    this.harmless.push(
      this.report({ column: this.columns.of.get(meaning)?.column ?? null, kind, detail }, 'noticed', null),
    );
  }

  private refuse(meaning: ColumnMeaning, kind: FindingKind, detail: string): never {
    throw new RowRefused({ column: this.columns.of.get(meaning)?.column ?? null, kind, detail });
  }

  private refuseUncomputed(column: number): never {
    const detail =
      'The formula in this cell has no stored value. Open the file in your spreadsheet program, save it and send it again.';
    throw new RowRefused({ column, kind: 'formula-without-value', detail });
  }
}

/** First rows of each item, location and week: one whole number per week of a series. */
class SeenKeys {
  private readonly series = new Map<string, { firstWeek: number; rows: Int32Array }>();

  /** Row in which the key stood first; null if this is the first, which is then remembered. */
  remember(row: ImportRow): number | null {
    const key = `${row.item}\u0000${row.location}`;
    const week = Math.floor(toDayNumber(row.weekStart) / 7);
    let known = this.series.get(key);
    if (!known) {
      known = { firstWeek: week - 4, rows: new Int32Array(64) };
      this.series.set(key, known);
    }
    if (week < known.firstWeek || week >= known.firstWeek + known.rows.length) {
      const firstWeek = Math.min(week - 16, known.firstWeek);
      const length = Math.max(week + 1, known.firstWeek + known.rows.length) - firstWeek + 64;
      const rows = new Int32Array(length);
      rows.set(known.rows, known.firstWeek - firstWeek);
      known.firstWeek = firstWeek;
      known.rows = rows;
    }
    const place = week - known.firstWeek;
    const earlier = known.rows[place] ?? 0;
    if (earlier !== 0) return earlier;
    known.rows[place] = row.row;
    return null;
  }
}

function refuseDuplicate(seen: SeenKeys, row: ImportRow, reader: RowReader): ImportFinding | null {
  const earlier = seen.remember(row);
  if (earlier === null) return null;
  const place = row.location === NO_LOCATION ? '' : ` at ${row.location}`;
  const detail = `${row.item}${place} has this week already in row ${earlier}; that one is taken. Remove one of the two.`;
  return reader.report({ column: null, kind: 'duplicate-row', detail }, 'refused', null);
}

class TotalsCounter {
  private readonly weeks = new Set<string>();
  private readonly items = new Set<string>();
  private readonly locations = new Set<string>();
  private readonly findings: Partial<Record<FindingKind, number>> = {};
  private readonly untold = new Map<FindingKind, { count: number; last: ImportFinding }>();
  private readonly hasUnits: boolean;
  private readonly hasNetValue: boolean;
  private rowsTaken = 0;
  private rowsRefused = 0;
  private units = new ExactSum();
  private netValue = new ExactSum();

  constructor(columns: ColumnPlaces) {
    this.hasUnits = columns.of.has('units');
    this.hasNetValue = columns.of.has('netValue');
  }

  take(row: ImportRow): void {
    this.rowsTaken += 1;
    this.weeks.add(row.weekStart);
    this.items.add(row.item);
    this.locations.add(row.location);
    this.units.add(row.units ?? 0);
    this.netValue.add(row.netValue ?? 0);
  }

  refuse(finding: ImportFinding): void {
    this.rowsRefused += 1;
    this.count(finding.kind);
  }

  isStillTold(finding: ImportFinding): boolean {
    if (this.count(finding.kind) <= MOST_HARMLESS_FINDINGS) return true;
    this.untold.set(finding.kind, { count: (this.untold.get(finding.kind)?.count ?? 0) + 1, last: finding });
    return false;
  }

  tellUntold(): ImportFinding[] {
    return [...this.untold].map(([kind, { count, last }]) => ({
      ...last,
      kind: 'more-of-these',
      before: null,
      after: null,
      verdict: 'noticed',
      detail: `${count} more rows have the same remark (${kind}), the last one here. ${last.detail}`,
    }));
  }

  totals(): ImportTotals {
    const weeks = [...this.weeks].sort();
    return {
      rowsTaken: this.rowsTaken,
      rowsRefused: this.rowsRefused,
      weeks: weeks.length,
      items: this.items.size,
      locations: this.locations.size,
      units: this.hasUnits ? this.units.value : null,
      netValue: this.hasNetValue ? this.netValue.value : null,
      firstWeek: weeks[0] ?? null,
      lastWeek: weeks.at(-1) ?? null,
      findings: { ...this.findings },
    };
  }

  private count(kind: FindingKind): number {
    return (this.findings[kind] = (this.findings[kind] ?? 0) + 1);
  }
}

/** Running sum whose rounding error doesn't grow with the number of rows (Neumaier 1974), so that control totals agree. */
class ExactSum {
  private sum = 0;
  private rest = 0;

  add(value: number): void {
    const next = this.sum + value;
    this.rest += Math.abs(this.sum) >= Math.abs(value) ? this.sum - next + value : value - next + this.sum;
    this.sum = next;
  }

  get value(): number {
    return this.sum + this.rest;
  }
}

/** Codes that a spreadsheet stored as numbers read as they are shown; `="001"` is how some exports protect leading zeros. */
function readCellText(cell: CellValue): string {
  if (cell === null) return '';
  if (typeof cell === 'object') return cell.date;
  if (typeof cell !== 'string') return String(cell);
  const text = cell.trim();
  return (/^="(.*)"$/.exec(text)?.[1] ?? text).trim();
}

function showCell(cell: CellValue): string | null {
  if (cell === null) return null;
  return (typeof cell === 'object' ? cell.date : String(cell)).slice(0, 100);
}

function nameWeekday(weekday: number): string {
  const monday = '2026-11-30';
  return new Intl.DateTimeFormat('en-GB', { weekday: 'long', timeZone: 'UTC' }).format(
    new Date(`${addDays(monday, (weekday + 6) % 7)}T00:00:00Z`),
  );
}

import type { ColumnMeaning } from '../../../shared/domain/column-meanings.ts';
import { numberMeanings } from '../../../shared/domain/column-meanings.ts';
import { toDayNumber, weekdayOf, type Weekday } from '../../../shared/domain/weeks.ts';
import { findHeader, type FoundHeader } from './header.ts';
import { simplifyName } from './header-words.ts';
import {
  fingerprintHeader,
  listMissingMeanings,
  proposeKind,
  proposeMapping,
  type ColumnProposal,
  type ImportKind,
  type MappedColumn,
} from './mapping.ts';
import { detectDecimalSign, type DecimalSign } from './number-reading.ts';
import type { OpenedTable, SkippedSheet, TableRow, TableSheet } from './table.ts';
import { UnreadableFileError } from './unreadable-file-error.ts';
import { detectDateOrder, readBothOrders, readWeekCell, type DateOrder } from './week-reading.ts';

/** Which rows are read and what their columns mean; the part of an import's settings that is remembered for files that look alike. */
export interface ImportMapping {
  sheets: { name: string; headerRow: number }[];
  columns: MappedColumn[];
}

/** How cells are understood. */
export interface ReadingForm {
  decimalSign: DecimalSign;
  dateOrder: DateOrder;
  /** What `202611`, `2026-11` and `11/2026` count. */
  yearNumberIs: 'week' | 'month';
  /** Whether a date is the first or the last day of its trading week. */
  weekDateIs: 'first-day' | 'last-day';
  /** First day of the trading week. */
  firstWeekday: Weekday;
}

/** What the file doesn't settle and a person should confirm. */
export type OpenQuestion = 'decimal-sign' | 'date-order' | 'week-or-month' | 'week-date-is' | 'first-weekday';

/** Figures that aren't weekly, so that no row can be taken as it stands. */
export interface GranularityRefusal {
  code: 'daily-figures' | 'monthly-figures' | 'no-weeks';
  sentence: string;
}

export interface FormProposal {
  form: ReadingForm;
  questions: OpenQuestion[];
  refusal: GranularityRefusal | null;
}

export interface TableInspection extends FormProposal {
  kind: ImportKind | null;
  mapping: ImportMapping;
  columns: ColumnProposal[];
  /** Names of the columns as the file has them. */
  names: string[];
  /** Needed meanings that no column has. */
  missing: ColumnMeaning[];
  fingerprint: string;
  /** Sheets that are left out, and why. */
  skippedSheets: (SkippedSheet | { name: string; reason: 'other columns' | 'no header' })[];
  /** The first rows below the header. */
  sampleRows: TableRow[];
}

const SAMPLE_ROWS = 500;
const SHOWN_ROWS = 20;
const FORM_ROWS = 60_000;

/**
 * Looks into a table before it is imported: header, columns, kind and how weeks and numbers are written. Of several sheets, the one
 * whose columns are understood best leads, and sheets with the same columns are read with it.
 * fixedFirstWeekday: the company's first day of the trading week, once it is settled.
 * Throws UnreadableFileError (`empty`, `header-only`, `no-header` and what reading itself refuses).
 */
export async function inspectTable(
  table: OpenedTable,
  context: { fixedFirstWeekday: Weekday | null },
): Promise<TableInspection> {
  const candidates: SheetSample[] = [];
  const skippedSheets: TableInspection['skippedSheets'] = [...table.skippedSheets];
  let isAnythingFilled = false;
  let isHeaderAlone = false;
  for (const sheet of table.sheets) {
    const rows = await takeRows(sheet, SAMPLE_ROWS + 60);
    if (rows.length > 0) isAnythingFilled = true;
    const header = findHeader(rows);
    const below = header ? rows.filter((row) => row.row > header.row) : [];
    if (header && below.length > 0)
      candidates.push({ sheet, header, rows: below, columns: proposeMapping(header.names, below) });
    else {
      isHeaderAlone ||= header !== null;
      skippedSheets.push({ name: sheet.name, reason: rows.length === 0 ? 'no cells' : 'no header' });
    }
  }
  candidates.sort((left, right) => rankColumns(right.columns) - rankColumns(left.columns));
  const lead = candidates[0];
  if (!lead) throw buildNoTableError(isAnythingFilled, isHeaderAlone);

  const fingerprint = fingerprintHeader(lead.header.names);
  const alike = table.sheets.flatMap((sheet) => {
    const candidate = candidates.find((other) => other.sheet === sheet);
    if (!candidate) return [];
    if (fingerprintHeader(candidate.header.names) === fingerprint)
      return [{ name: sheet.name, headerRow: candidate.header.row }];
    skippedSheets.push({ name: sheet.name, reason: 'other columns' });
    return [];
  });
  const mapping: ImportMapping = { sheets: alike, columns: lead.columns.map(toMappedColumn) };
  return {
    kind: proposeKind(lead.columns),
    mapping,
    columns: lead.columns,
    names: lead.header.names,
    missing: listMissingMeanings(lead.columns),
    fingerprint,
    skippedSheets,
    sampleRows: lead.rows.slice(0, SHOWN_ROWS),
    ...(await proposeForm(table, mapping, { ...context, names: lead.header.names })),
  };
}

/** Proposes how weeks and numbers are to be read, from the cells of the mapped columns; call it anew when a person changes the mapping. */
export async function proposeForm(
  table: OpenedTable,
  mapping: ImportMapping,
  context: { fixedFirstWeekday: Weekday | null; names: readonly string[] },
): Promise<FormProposal> {
  const weekColumn = mapping.columns.find(({ meaning }) => meaning === 'week')?.column;
  const numberColumns = mapping.columns
    .filter(({ meaning }) => numberMeanings.includes(meaning))
    .map(({ column }) => column);
  const evidence = await gatherEvidence(table, mapping, weekColumn, numberColumns);
  const questions: OpenQuestion[] = [];

  const decimalSign = chooseDecimalSign(evidence, questions);
  const dateOrder = chooseDateOrder(evidence, questions);
  const weekName = simplifyName(weekColumn === undefined ? '' : (context.names[weekColumn] ?? ''));
  const yearNumberIs = chooseYearNumber(evidence, weekName, questions);
  const cellForm = { dateOrder, yearNumberIs, hasDatesFrom1904: table.hasDatesFrom1904 };
  const dates = new Set<string>();
  let months = 0;
  let labels = 0;
  for (const cell of evidence.weekCells.values()) {
    const read = readWeekCell(cell, cellForm);
    if (read.type === 'date') dates.add(read.date);
    else if (read.type === 'month') months += 1;
    else if (read.type === 'label') labels += 1;
  }
  const trading = chooseTradingWeek(
    labels > dates.size ? [] : [...dates],
    weekName,
    context.fixedFirstWeekday,
    questions,
  );
  return {
    form: { decimalSign, dateOrder, yearNumberIs, ...trading },
    questions,
    refusal: weekColumn === undefined ? null : findGranularityRefusal([...dates].sort(), labels, months),
  };
}

interface SheetSample {
  sheet: TableSheet;
  header: FoundHeader;
  rows: TableRow[];
  columns: ColumnProposal[];
}

interface FormEvidence {
  /** Different week cells by their text. */
  weekCells: Map<string, TableRow['cells'][number]>;
  points: number;
  commas: number;
  either: number;
}

async function gatherEvidence(
  table: OpenedTable,
  mapping: ImportMapping,
  weekColumn: number | undefined,
  numberColumns: readonly number[],
): Promise<FormEvidence> {
  const evidence: FormEvidence = { weekCells: new Map(), points: 0, commas: 0, either: 0 };
  let rowsSeen = 0;
  for (const { name, headerRow } of mapping.sheets) {
    const sheet = table.sheets.find((other) => other.name === name);
    if (!sheet) continue;
    reading: for await (const batch of sheet.batches()) {
      for (const row of batch) {
        if (row.row <= headerRow) continue;
        if (++rowsSeen > FORM_ROWS) break reading;
        const week = weekColumn === undefined ? null : (row.cells[weekColumn] ?? null);
        if (week !== null && evidence.weekCells.size < 20_000) {
          evidence.weekCells.set(typeof week === 'object' ? week.date : `${typeof week}${String(week)}`, week);
        }
        for (const column of numberColumns) {
          const cell = row.cells[column];
          if (typeof cell !== 'string') continue;
          const sign = detectDecimalSign(cell);
          if (sign === '.') evidence.points += 1;
          else if (sign === ',') evidence.commas += 1;
          else if (sign === 'either') evidence.either += 1;
        }
      }
    }
  }
  return evidence;
}

function chooseDecimalSign(evidence: FormEvidence, questions: OpenQuestion[]): DecimalSign {
  const isMixed = evidence.points > 0 && evidence.commas > 0;
  if (isMixed || (evidence.either > 0 && evidence.points + evidence.commas === 0)) questions.push('decimal-sign');
  return evidence.commas > evidence.points ? ',' : '.';
}

function chooseDateOrder(evidence: FormEvidence, questions: OpenQuestion[]): DateOrder {
  const proven = { 'day-first': 0, 'month-first': 0 };
  const weekdays = { 'day-first': new Set<Weekday>(), 'month-first': new Set<Weekday>() };
  let ambiguous = 0;
  for (const cell of evidence.weekCells.values()) {
    if (typeof cell !== 'string') continue;
    const order = detectDateOrder(cell);
    if (order) proven[order] += 1;
    const both = readBothOrders(cell);
    if (!both) continue;
    ambiguous += 1;
    weekdays['day-first'].add(weekdayOf(both.dayFirst));
    weekdays['month-first'].add(weekdayOf(both.monthFirst));
  }
  if (proven['day-first'] > 0 && proven['month-first'] > 0 && ambiguous > 0) questions.push('date-order');
  if (proven['day-first'] !== proven['month-first']) {
    return proven['day-first'] > proven['month-first'] ? 'day-first' : 'month-first';
  }
  // Weekly dates fall on one weekday: the order under which they do is the one that was meant.
  const dayFirst = weekdays['day-first'].size;
  const monthFirst = weekdays['month-first'].size;
  if (dayFirst !== monthFirst && Math.min(dayFirst, monthFirst) === 1 && ambiguous > 1) {
    return dayFirst < monthFirst ? 'day-first' : 'month-first';
  }
  if (ambiguous > 0 && !questions.includes('date-order')) questions.push('date-order');
  return 'day-first';
}

function chooseYearNumber(evidence: FormEvidence, weekName: string, questions: OpenQuestion[]): 'week' | 'month' {
  let undecided = 0;
  for (const cell of evidence.weekCells.values()) {
    const asMonth = readWeekCell(cell, { dateOrder: 'day-first', yearNumberIs: 'month', hasDatesFrom1904: false });
    const asWeek = readWeekCell(cell, { dateOrder: 'day-first', yearNumberIs: 'week', hasDatesFrom1904: false });
    if (asMonth.type === 'label' && !(typeof cell === 'string' && /w/i.test(cell))) return 'week';
    if (asMonth.type === 'month' && asWeek.type === 'label') undecided += 1;
  }
  if (undecided === 0 || /\b(week|wk|yyyyww|yearweek)\b/.test(weekName)) return 'week';
  if (!/\b(month|yyyymm)\b/.test(weekName)) questions.push('week-or-month');
  return 'month';
}

function chooseTradingWeek(
  dates: readonly string[],
  weekName: string,
  fixedFirstWeekday: Weekday | null,
  questions: OpenQuestion[],
): Pick<ReadingForm, 'weekDateIs' | 'firstWeekday'> {
  const counts = new Map<Weekday, number>();
  for (const date of dates) counts.set(weekdayOf(date), (counts.get(weekdayOf(date)) ?? 0) + 1);
  const [weekday, count] = [...counts].sort((left, right) => right[1] - left[1])[0] ?? [null, 0];
  const saysEnd = /\b(end|ending|last day|w e|we date)\b/.test(weekName);
  const saysStart = /\b(start|starting|begin|beginning|commencing|first day|w c|wc)\b/.test(weekName);
  if (weekday === null) return { weekDateIs: 'first-day', firstWeekday: fixedFirstWeekday ?? 1 };
  const dayAfter = ((weekday + 1) % 7) as Weekday;
  if (fixedFirstWeekday !== null) {
    const isLastDay = dayAfter === fixedFirstWeekday;
    if (!isLastDay && weekday !== fixedFirstWeekday) questions.push('first-weekday');
    return {
      weekDateIs: isLastDay || (saysEnd && weekday !== fixedFirstWeekday) ? 'last-day' : 'first-day',
      firstWeekday: fixedFirstWeekday,
    };
  }
  if (counts.size > 1 && count < 0.9 * dates.length) questions.push('first-weekday');
  if (saysEnd) return { weekDateIs: 'last-day', firstWeekday: dayAfter };
  // A Sunday opens the week in some countries and closes it in others; nothing in the file can tell.
  if (weekday === 0 && !saysStart) questions.push('week-date-is');
  return { weekDateIs: 'first-day', firstWeekday: weekday };
}

function findGranularityRefusal(dates: readonly string[], labels: number, months: number): GranularityRefusal | null {
  if (months > 0 && months >= labels + dates.length) {
    return {
      code: 'monthly-figures',
      sentence: 'The figures are by month. Fairweek plans by week: export the same table by week and send that.',
    };
  }
  if (labels === 0 && dates.length === 0) {
    return {
      code: 'no-weeks',
      sentence:
        'No week can be read in the column chosen for it. Choose the column that holds the week, as 2026-W49 or as a date.',
    };
  }
  if (labels > dates.length || dates.length < 4) return null;
  const days = dates.map(toDayNumber);
  const steps = days.slice(1).map((day, index) => day - (days[index] ?? day));
  const middle = [...steps].sort((left, right) => left - right)[Math.floor(steps.length / 2)] ?? 7;
  const weekdays = new Set(dates.map(weekdayOf)).size;
  if (middle < 7 && weekdays >= 4) {
    return {
      code: 'daily-figures',
      sentence: 'The figures are by day. Fairweek plans by week: add them up by trading week and send that.',
    };
  }
  if (middle >= 28 && middle <= 31 && weekdays > 1) {
    return {
      code: 'monthly-figures',
      sentence: 'The figures are by month. Fairweek plans by week: export the same table by week and send that.',
    };
  }
  return null;
}

async function takeRows(sheet: TableSheet, count: number): Promise<TableRow[]> {
  const rows: TableRow[] = [];
  for await (const batch of sheet.batches()) {
    rows.push(...batch.slice(0, count - rows.length));
    if (rows.length >= count) break;
  }
  return rows;
}

function rankColumns(columns: readonly ColumnProposal[]): number {
  return columns.reduce((sum, { confidence }) => sum + confidence, 0) - 3 * listMissingMeanings(columns).length;
}

function toMappedColumn({ column, meaning, mechanic, scale }: ColumnProposal): MappedColumn {
  return {
    column,
    meaning,
    ...(mechanic === undefined ? {} : { mechanic }),
    ...(scale === undefined ? {} : { scale }),
  };
}

function buildNoTableError(isAnythingFilled: boolean, isHeaderAlone: boolean): UnreadableFileError {
  if (!isAnythingFilled) {
    return new UnreadableFileError('empty', 'The file holds no filled cell. Export it again and send the new file.');
  }
  return isHeaderAlone
    ? new UnreadableFileError(
        'header-only',
        'The file has column names but no rows below them. Check the filter of the export and send it again.',
      )
    : new UnreadableFileError(
        'no-header',
        'No row with column names was found. Put the names (week, item, units, …) in one row above the figures and send it again.',
      );
}

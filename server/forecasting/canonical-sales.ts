import Papa from 'papaparse';
import { isIsoDate, parseWeekLabel, startOfTradingWeek, weekdayOf, type Weekday } from '../../shared/domain/weeks.ts';
import type { PlannedWeek, SoldWeek } from './types.ts';

/** One row of the canonical long file. */
export interface CanonicalSalesRow {
  line: string;
  item: string;
  location: string;
  sold: SoldWeek;
  /** The price that the row states itself; NaN where the price was derived from net value and units. */
  statedPrice: number;
}

export interface CanonicalCalendarRow {
  line: string;
  item: string;
  location: string;
  planned: PlannedWeek;
}

const MECHANIC_PREFIX = 'promo_';

/** The file can't be read as the canonical long file; the message says in which row and why. */
export class CanonicalFileError extends Error {
  override name = 'CanonicalFileError';
}

/**
 * Reads the canonical long sales file: `week,category,line,item,location,units,…` (column order free, all but week, item and
 * units optional). A week is an ISO week or the first day of the trading week; ISO weeks take the weekday of the dates beside
 * them, else Monday. Throws CanonicalFileError naming the row.
 */
export function readCanonicalSales(text: string): CanonicalSalesRow[] {
  const { rows, mechanics, firstWeekday } = parseRows(text, ['week', 'item', 'units']);
  return rows.map((row, index) => {
    const at = index + 2;
    const units = readNumber(row['units'], at, 'units');
    return {
      line: row['line']?.trim() || row['category']?.trim() || 'All',
      item: readText(row['item'], at, 'item'),
      location: row['location']?.trim() || 'All',
      sold: {
        weekStart: readWeek(row['week'], at, firstWeekday),
        units,
        price: readPrice(row, units, at),
        regularPrice: readNumber(row['regular_price'], at, 'regular_price'),
        feature: readNumber(row['feature'], at, 'feature'),
        display: readNumber(row['display'], at, 'display'),
        mechanics: readMechanics(row, mechanics, at),
        gap: readNumber(row['gap'], at, 'gap') || 0,
        daysOpen: orElse(readNumber(row['days_open'], at, 'days_open'), 7),
      },
      statedPrice: readNumber(row['price'], at, 'price'),
    };
  });
}

/** Reads a calendar: `week,line,item,location,price,regular_price,depth,feature,display,promo_…`, its weeks on the sales' first weekday. Throws CanonicalFileError. */
export function readCanonicalCalendar(text: string, firstWeekday: Weekday): CanonicalCalendarRow[] {
  const { rows, mechanics } = parseRows(text, ['week', 'item']);
  return rows.map((row, index) => {
    const at = index + 2;
    return {
      line: row['line']?.trim() || row['category']?.trim() || 'All',
      item: readText(row['item'], at, 'item'),
      location: row['location']?.trim() || 'All',
      planned: {
        weekStart: readWeek(row['week'], at, firstWeekday),
        price: readNumber(row['price'], at, 'price'),
        regularPrice: readNumber(row['regular_price'], at, 'regular_price'),
        depth: readNumber(row['depth'], at, 'depth'),
        feature: readNumber(row['feature'], at, 'feature'),
        display: readNumber(row['display'], at, 'display'),
        mechanics: readMechanics(row, mechanics, at),
      },
    };
  });
}

type RawRow = Readonly<Record<string, string | undefined>>;

function parseRows(
  text: string,
  needed: readonly string[],
): { rows: RawRow[]; mechanics: string[]; firstWeekday: Weekday } {
  const parsed = Papa.parse<Record<string, string>>(text.replace(/^\uFEFF/, ''), {
    header: true,
    skipEmptyLines: 'greedy',
    transformHeader: (header) => header.trim().toLowerCase(),
  });
  const fields = parsed.meta.fields ?? [];
  const missing = needed.filter((name) => !fields.includes(name));
  if (missing.length > 0) throw new CanonicalFileError(`the file has no column ${missing.join(', ')}`);
  const mechanics = fields.filter((name) => name.startsWith(MECHANIC_PREFIX));
  const dated = parsed.data.find((row) => isIsoDate(row['week']?.trim() ?? ''));
  return { rows: parsed.data, mechanics, firstWeekday: dated ? weekdayOf(dated['week']!.trim()) : 1 };
}

/** First day of the trading week that an ISO week or a date names; null where the text is neither. */
export function parseTradingWeek(text: string, firstWeekday: Weekday): string | null {
  return isIsoDate(text) ? startOfTradingWeek(text, firstWeekday) : parseWeekLabel(text, firstWeekday);
}

function readWeek(value: string | undefined, at: number, firstWeekday: Weekday): string {
  const text = value?.trim() ?? '';
  const week = parseTradingWeek(text, firstWeekday);
  if (week === null) throw new CanonicalFileError(`row ${at}: "${text}" is neither an ISO week nor a date`);
  return week;
}

function readText(value: string | undefined, at: number, column: string): string {
  const text = value?.trim() ?? '';
  if (text === '') throw new CanonicalFileError(`row ${at}: ${column} is empty`);
  return text;
}

function readNumber(value: string | undefined, at: number, column: string): number {
  const text = value?.trim() ?? '';
  if (text === '' || text === 'NA') return Number.NaN;
  const number = Number(text);
  if (!Number.isFinite(number)) throw new CanonicalFileError(`row ${at}: ${column} "${text}" is not a number`);
  return number;
}

function readPrice(row: RawRow, units: number, at: number): number {
  const price = readNumber(row['price'], at, 'price');
  if (!Number.isNaN(price)) return price;
  const netValue = readNumber(row['net_value'], at, 'net_value');
  return netValue > 0 && units > 0 ? netValue / units : Number.NaN;
}

function readMechanics(row: RawRow, mechanics: readonly string[], at: number): Record<string, number> {
  const values: Record<string, number> = {};
  for (const column of mechanics) {
    const share = readNumber(row[column], at, column);
    if (share > 0) values[column.slice(MECHANIC_PREFIX.length)] = share;
  }
  return values;
}

function orElse(value: number, otherwise: number): number {
  return Number.isNaN(value) ? otherwise : value;
}

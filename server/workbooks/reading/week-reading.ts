import {
  addDays,
  isIsoDate,
  mondayOfIsoWeek,
  parseWeekLabel,
  weekdayOf,
  type Weekday,
} from '../../../shared/domain/weeks.ts';
import { readSerialDate } from './cell-dates.ts';
import type { CellValue } from './table.ts';

export type DateOrder = 'day-first' | 'month-first';

/** How week cells of a file are to be read. */
export interface WeekForm {
  dateOrder: DateOrder;
  /** What `202611`, `2026-11` and `11/2026` count. */
  yearNumberIs: 'week' | 'month';
  hasDatesFrom1904: boolean;
}

export type WeekCell =
  | { type: 'label'; year: number; week: number }
  | { type: 'date'; date: string }
  | { type: 'month'; year: number; month: number }
  | { type: 'unreadable' };

const MONTHS = ['jan', 'feb', 'mar', 'apr', 'may', 'jun', 'jul', 'aug', 'sep', 'oct', 'nov', 'dec'];
const UNREADABLE: WeekCell = { type: 'unreadable' };
const TIME_OF_DAY = '(?:[T ]\\d{1,2}:\\d{2}.*)?';
const LABEL = /^(\d{4})[-\s/_]?(?:w|wk|week)[-\s.]?(\d{1,2})(?:-?([1-7]))?$/i;
const REVERSED_LABEL = /^(?:w|wk|week)[-\s.]?(\d{1,2})[-\s/,.]+(\d{4})$/i;
const YEAR_FIRST_DATE = new RegExp(`^(\\d{4})[-/.](\\d{1,2})[-/.](\\d{1,2})${TIME_OF_DAY}$`);
const YEAR_LAST_DATE = new RegExp(`^(\\d{1,2})([-/.])(\\d{1,2})\\2(\\d{4}|\\d{2})${TIME_OF_DAY}$`);
const NAMED_MONTH_DATE = /^(\d{1,2})[-\s./]*([a-z]{3,9})[-\s./,]*(\d{4}|\d{2})$/i;
const NAMED_MONTH_FIRST_DATE = /^([a-z]{3,9})[-\s.]*(\d{1,2})(?:st|nd|rd|th)?,?\s+(\d{4})$/i;
const NAMED_MONTH = /^([a-z]{3,9})[-\s.']*(\d{4})$/i;

/** Serials of 1980-01-01 to 2099-12-31: what a bare number must lie in to be taken for a date. */
const FIRST_SERIAL = 29_221;
const LAST_SERIAL = 73_050;

/** Reads a week cell as a named week, a date or a month. Ambiguous dates follow `form.dateOrder`; dates with points are day first. */
export function readWeekCell(cell: CellValue, form: WeekForm): WeekCell {
  if (cell === null || typeof cell === 'boolean') return UNREADABLE;
  if (typeof cell === 'object') return isIsoDate(cell.date) ? { type: 'date', date: cell.date } : UNREADABLE;
  if (typeof cell === 'number') return readNumberCell(cell, form);
  return readTextCell(
    cell
      .trim()
      .replace(/^week\s+of\s+/i, '')
      .replace(/^(?:mon|tue|wed|thu|fri|sat|sun)[a-z]*,?\s+/i, ''),
    form,
  );
}

function readNumberCell(value: number, form: WeekForm): WeekCell {
  if (Number.isInteger(value) && value >= 198_001 && value <= 209_953) {
    return readYearNumber(Math.floor(value / 100), value % 100, form);
  }
  if (Number.isInteger(value) && value >= 19_800_101 && value <= 20_991_231) return readTextCell(String(value), form);
  const offset = form.hasDatesFrom1904 ? 1462 : 0;
  if (value + offset >= FIRST_SERIAL && value + offset <= LAST_SERIAL) {
    const date = readSerialDate(value, form.hasDatesFrom1904);
    if (date !== null) return { type: 'date', date };
  }
  return UNREADABLE;
}

function readTextCell(text: string, form: WeekForm): WeekCell {
  let match = LABEL.exec(text);
  if (match) return readLabel(Number(match[1]), Number(match[2]), match[3] === undefined ? null : Number(match[3]));
  match = REVERSED_LABEL.exec(text);
  if (match) return readLabel(Number(match[2]), Number(match[1]), null);
  match = YEAR_FIRST_DATE.exec(text);
  if (match) return readDate(Number(match[1]), Number(match[2]), Number(match[3]));
  match = YEAR_LAST_DATE.exec(text);
  if (match) {
    const [first, second, year] = [Number(match[1]), Number(match[3]), readYear(match[4] ?? '')];
    const isDayFirst = match[2] === '.' || first > 12 || (second <= 12 && form.dateOrder === 'day-first');
    return isDayFirst ? readDate(year, second, first) : readDate(year, first, second);
  }
  match = NAMED_MONTH_DATE.exec(text);
  if (match) return readDate(readYear(match[3] ?? ''), readMonthName(match[2] ?? ''), Number(match[1]));
  match = NAMED_MONTH_FIRST_DATE.exec(text);
  if (match) return readDate(Number(match[3]), readMonthName(match[1] ?? ''), Number(match[2]));
  match = NAMED_MONTH.exec(text);
  if (match && readMonthName(match[1] ?? '') > 0) {
    return { type: 'month', year: Number(match[2]), month: readMonthName(match[1] ?? '') };
  }
  match = /^(\d{4})(\d{2})(\d{2})$/.exec(text);
  if (match) return readDate(Number(match[1]), Number(match[2]), Number(match[3]));
  match = /^(\d{4})[-/\s.]?(\d{2})$/.exec(text);
  if (match) return readYearNumber(Number(match[1]), Number(match[2]), form);
  match = /^(\d{1,2})[-/.](\d{4})$/.exec(text);
  if (match) return readYearNumber(Number(match[2]), Number(match[1]), form);
  if (/^\d{5}(\.\d+)?$/.test(text)) return readNumberCell(Number(text), form);
  return UNREADABLE;
}

function readYearNumber(year: number, number: number, form: WeekForm): WeekCell {
  if (number > 12 || form.yearNumberIs === 'week') return readLabel(year, number, null);
  return number >= 1 ? { type: 'month', year, month: number } : UNREADABLE;
}

function readLabel(year: number, week: number, weekday: number | null): WeekCell {
  const monday = year >= 1000 && week >= 1 && week <= 53 ? mondayOfIsoWeek(year, week) : null;
  if (monday === null) return UNREADABLE;
  return weekday === null ? { type: 'label', year, week } : { type: 'date', date: addDays(monday, weekday - 1) };
}

function readDate(year: number, month: number, day: number): WeekCell {
  const date = `${String(year).padStart(4, '0')}-${String(month).padStart(2, '0')}-${String(day).padStart(2, '0')}`;
  return isIsoDate(date) ? { type: 'date', date } : UNREADABLE;
}

function readYear(digits: string): number {
  const year = Number(digits);
  if (digits.length > 2) return year;
  return year + (year >= 80 ? 1900 : 2000);
}

function readMonthName(name: string): number {
  const month = MONTHS.indexOf(name.slice(0, 3).toLowerCase()) + 1;
  const full = [
    'january',
    'february',
    'march',
    'april',
    'may',
    'june',
    'july',
    'august',
    'september',
    'october',
    'november',
    'december',
  ];
  return month > 0 && (full[month - 1]?.startsWith(name.toLowerCase()) || name.toLowerCase() === 'sept') ? month : 0;
}

/** The two readings of a date whose day and month can't be told apart; null for all other texts. */
export function readBothOrders(text: string): { dayFirst: string; monthFirst: string } | null {
  const match = YEAR_LAST_DATE.exec(text.trim());
  if (!match || match[2] === '.' || Number(match[1]) > 12 || Number(match[3]) > 12) return null;
  const form = { yearNumberIs: 'week', hasDatesFrom1904: false } as const;
  const dayFirst = readWeekCell(text, { ...form, dateOrder: 'day-first' });
  const monthFirst = readWeekCell(text, { ...form, dateOrder: 'month-first' });
  return dayFirst.type === 'date' && monthFirst.type === 'date'
    ? { dayFirst: dayFirst.date, monthFirst: monthFirst.date }
    : null;
}

/** The order that a date with slashes or dashes proves by a part above 12; null if it proves none. */
export function detectDateOrder(text: string): DateOrder | null {
  const match = YEAR_LAST_DATE.exec(text.trim());
  if (!match || match[2] === '.') return null;
  if (Number(match[1]) > 12) return 'day-first';
  return Number(match[3]) > 12 ? 'month-first' : null;
}

/** First day of the trading week that a cell names; null for a date that is not the first (or last) day of one. */
export function resolveWeekStart(
  cell: Extract<WeekCell, { type: 'label' | 'date' }>,
  trading: { firstWeekday: Weekday; weekDateIs: 'first-day' | 'last-day' },
): string | null {
  if (cell.type === 'label') {
    return parseWeekLabel(`${cell.year}-W${String(cell.week).padStart(2, '0')}`, trading.firstWeekday);
  }
  const start = trading.weekDateIs === 'first-day' ? cell.date : addDays(cell.date, -6);
  return weekdayOf(start) === trading.firstWeekday ? start : null;
}

/**
 * Trading weeks. A week is keyed by its first day (`weekStart`, `YYYY-MM-DD`) and named by the ISO 8601 week of its fourth day,
 * so that a Thursday-to-Wednesday week and a Monday-to-Sunday week each carry the number of the ISO week they mostly lie in.
 * All arithmetic is on UTC day numbers: no time zone and no daylight saving can shift a week.
 */

const MS_PER_DAY = 86_400_000;

/** 0 = Sunday … 6 = Saturday. */
export type Weekday = 0 | 1 | 2 | 3 | 4 | 5 | 6;

/** Plans ask for the same few hundred dates over and over: parsing and checking each time took a fifth of a save over 20,000 overrides. */
const knownDayNumbers = new Map<string, number>();
const mostKnownDayNumbers = 20_000;

/** Days since 1970-01-01 of an ISO date. Throws RangeError if the text isn't a real date. */
export function toDayNumber(date: string): number {
  const known = knownDayNumbers.get(date);
  if (known !== undefined) return known;
  const dayNumber = parseDate(date);
  if (knownDayNumbers.size >= mostKnownDayNumbers) knownDayNumbers.clear();
  knownDayNumbers.set(date, dayNumber);
  return dayNumber;
}

function parseDate(date: string): number {
  const match = /^(\d{4})-(\d{2})-(\d{2})$/.exec(date);
  if (match) {
    const milliseconds = Date.UTC(Number(match[1]), Number(match[2]) - 1, Number(match[3]));
    if (toIsoDate(milliseconds / MS_PER_DAY) === date) return milliseconds / MS_PER_DAY;
  }
  throw new RangeError(`not a date: ${date}`);
}

/** ISO date of a day number. */
export function toIsoDate(dayNumber: number): string {
  return new Date(dayNumber * MS_PER_DAY).toISOString().slice(0, 10);
}

/** Whether the text is a real calendar date written `YYYY-MM-DD`. */
export function isIsoDate(text: string): boolean {
  try {
    toDayNumber(text);
    return true;
  } catch {
    return false;
  }
}

export function weekdayOf(date: string): Weekday {
  return ((((toDayNumber(date) + 4) % 7) + 7) % 7) as Weekday;
}

export function addDays(date: string, days: number): string {
  return toIsoDate(toDayNumber(date) + days);
}

export function addWeeks(weekStart: string, weeks: number): string {
  return addDays(weekStart, 7 * weeks);
}

/** Whole weeks from `from` to `to`; both must start on the same weekday. */
export function weeksBetween(from: string, to: string): number {
  return Math.round((toDayNumber(to) - toDayNumber(from)) / 7);
}

/** First day of the trading week that holds `date`. */
export function startOfTradingWeek(date: string, firstWeekday: Weekday): string {
  return addDays(date, -((weekdayOf(date) - firstWeekday + 7) % 7));
}

/** `count` week starts from `first` on. */
export function listWeeks(first: string, count: number): string[] {
  return Array.from({ length: Math.max(0, count) }, (_, index) => addWeeks(first, index));
}

/** ISO 8601 year, week and weekday (1 = Monday … 7 = Sunday) of a date. */
export function isoWeekOf(date: string): { year: number; week: number; weekday: number } {
  const day = toDayNumber(date);
  const weekday = ((weekdayOf(date) + 6) % 7) + 1;
  const thursday = day - weekday + 4;
  const year = Number(toIsoDate(thursday).slice(0, 4));
  const week = 1 + Math.floor((thursday - toDayNumber(`${year}-01-01`)) / 7);
  return { year, week, weekday };
}

/** Monday of an ISO week, or null where that year has no such week. */
export function mondayOfIsoWeek(year: number, week: number): string | null {
  const fourthOfJanuary = `${String(year).padStart(4, '0')}-01-04`;
  const monday = addDays(fourthOfJanuary, 1 - isoWeekOf(fourthOfJanuary).weekday + 7 * (week - 1));
  const named = isoWeekOf(monday);
  return named.year === year && named.week === week ? monday : null;
}

/** `2026-W49` of a trading week: the ISO week of its fourth day. */
export function weekLabel(weekStart: string): string {
  const { year, week } = isoWeekOf(addDays(weekStart, 3));
  return `${year}-W${String(week).padStart(2, '0')}`;
}

/** `W49`. */
export function shortWeekLabel(weekStart: string): string {
  return weekLabel(weekStart).slice(5);
}

/** First day of the trading week whose fourth day lies in the named ISO week (`2026-W49`, `2026W49`); null if there is no such week. */
export function parseWeekLabel(label: string, firstWeekday: Weekday): string | null {
  const match = /^(\d{4})-?W(\d{2})$/i.exec(label.trim());
  if (!match) return null;
  const monday = mondayOfIsoWeek(Number(match[1]), Number(match[2]));
  if (monday === null) return null;
  for (let offset = 0; offset < 7; offset += 1) {
    const fourthDay = addDays(monday, offset);
    const start = addDays(fourthDay, -3);
    if (weekdayOf(start) === firstWeekday) return start;
  }
  return null;
}

/** Easter Sunday (Gregorian) by the anonymous computus (Meeus/Jones/Butcher). */
export function easterSunday(year: number): string {
  const a = year % 19;
  const b = Math.floor(year / 100);
  const c = year % 100;
  const d = Math.floor(b / 4);
  const e = b % 4;
  const f = Math.floor((b + 8) / 25);
  const g = Math.floor((b - f + 1) / 3);
  const h = (19 * a + b - d - g + 15) % 30;
  const i = Math.floor(c / 4);
  const k = c % 4;
  const l = (32 + 2 * e + 2 * i - h - k) % 7;
  const m = Math.floor((a + 11 * h + 22 * l) / 451);
  const month = Math.floor((h + l - 7 * m + 114) / 31);
  const day = ((h + l - 7 * m + 114) % 31) + 1;
  return `${year}-${String(month).padStart(2, '0')}-${String(day).padStart(2, '0')}`;
}

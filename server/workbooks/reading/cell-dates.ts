import { toDayNumber, toIsoDate } from '../../../shared/domain/weeks.ts';

const DAY_ZERO_1900 = toDayNumber('1899-12-30');
const DAYS_1904 = 1462;
/** The same few hundred days stand in every row of a file. */
const knownDates = new Map<number, string>();

/** Date formats among the built-in ones (ECMA-376 part 1, §18.8.30), times of day and durations left out. */
const BUILT_IN_DATE_FORMATS = new Set([
  14, 15, 16, 17, 22, 27, 28, 29, 30, 31, 34, 35, 36, 50, 51, 52, 53, 54, 55, 56, 57, 58,
]);

/** Whether numbers in this format are calendar dates. Formats that show only a time or a duration are not. */
export function isDateFormat(formatId: number, formatCode: string | undefined): boolean {
  if (formatCode === undefined) return BUILT_IN_DATE_FORMATS.has(formatId);
  const letters = formatCode
    .replace(/"[^"]*"/g, '')
    .replace(/\\./g, '')
    .replace(/[_*]./g, '')
    .replace(/\[[^\]]*\]/g, '')
    .toLowerCase()
    .replace(/general|am\/pm|a\/p/g, '');
  if (/[yd]/.test(letters)) return true;
  return /m/.test(letters) && !/[hs]/.test(letters);
}

/**
 * ISO date of a serial number, or null outside years 1900 to 9999. Serials below 60 in the 1900 system are a day off, because that
 * system counts a 29 February 1900 which never was.
 */
export function readSerialDate(serial: number, hasDatesFrom1904: boolean): string | null {
  const day = Math.floor(serial + (hasDatesFrom1904 ? DAYS_1904 : 0));
  if (!(day >= 1 && day <= 2_958_465)) return null;
  let date = knownDates.get(day);
  if (date === undefined) {
    date = toIsoDate(DAY_ZERO_1900 + (day < 60 ? day + 1 : day));
    if (knownDates.size < 20_000) knownDates.set(day, date);
  }
  return date;
}

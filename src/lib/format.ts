import { addDays, shortWeekLabel, weekLabel } from '../../shared/domain/weeks.ts';

/** Numbers and dates follow the person's browser; the texts are English. */
export const personLocale: string =
  typeof navigator === 'undefined' || !navigator.language ? 'en-GB' : navigator.language;

const dateLocale = personLocale === 'en-US' || !personLocale.startsWith('en') ? personLocale : 'en-GB';
const minus = '−';
const noBreakSpace = '\u00a0';

const numberFormats = new Map<string, Intl.NumberFormat>();
function numberFormat(digits: number, most = digits): Intl.NumberFormat {
  const key = `${digits}/${most}`;
  let format = numberFormats.get(key);
  if (!format) {
    format = new Intl.NumberFormat(personLocale, { minimumFractionDigits: digits, maximumFractionDigits: most });
    numberFormats.set(key, format);
  }
  return format;
}

/** Fractions that round to zero show no sign. */
function writeNumber(value: number, digits: number, most = digits): string {
  const text = numberFormat(digits, most).format(Math.abs(value));
  const isZero = Number(Math.abs(value).toFixed(most)) === 0;
  return value < 0 && !isZero ? minus + text : text;
}

/** `12,345`; `digits` decimals. */
export function formatUnits(value: number, digits = 0): string {
  return writeNumber(value, digits);
}

/** At most `digits` decimals, none where they'd be zero. */
export function formatNumber(value: number, digits = 2): string {
  return writeNumber(value, 0, digits);
}

/** `+840`, `−91`, `0`. */
export function formatSigned(value: number, digits = 0): string {
  const text = writeNumber(value, digits);
  return Number(value.toFixed(digits)) > 0 ? `+${text}` : text;
}

/** `11.8 %` of 0.118. */
export function formatPercent(fraction: number, digits = 1): string {
  return `${writeNumber(fraction * 100, digits)}${noBreakSpace}%`;
}

/** `+8.4 %` of 0.084. */
export function formatSignedPercent(fraction: number, digits = 1): string {
  return `${formatSigned(fraction * 100, digits)}${noBreakSpace}%`;
}

/** `× 1.05`. */
export function formatFactor(factor: number, digits = 2): string {
  return `×${noBreakSpace}${writeNumber(factor, digits)}`;
}

/** Money in the given currency (ISO 4217), or a plain figure where none is known. */
export function formatMoney(value: number, currency?: string | null, digits = 2): string {
  if (!currency) return writeNumber(value, digits);
  const text = new Intl.NumberFormat(personLocale, {
    style: 'currency',
    currency,
    minimumFractionDigits: digits,
    maximumFractionDigits: digits,
  }).format(Math.abs(value));
  return value < 0 ? minus + text : text;
}

const dateFormat = (options: Intl.DateTimeFormatOptions) => new Intl.DateTimeFormat(dateLocale, options);
const shortDate = dateFormat({ day: 'numeric', month: 'short', timeZone: 'UTC' });
const longDate = dateFormat({ day: 'numeric', month: 'long', year: 'numeric', timeZone: 'UTC' });
const monthOnly = dateFormat({ month: 'long', timeZone: 'UTC' });
const monthLetter = dateFormat({ month: 'narrow', timeZone: 'UTC' });
const weekdayName = dateFormat({ weekday: 'long', timeZone: 'UTC' });
const clock = dateFormat({ hour: '2-digit', minute: '2-digit', hourCycle: 'h23' });
const localDay = dateFormat({ day: 'numeric', month: 'short' });
const localDayOfYear = dateFormat({ day: 'numeric', month: 'short', year: 'numeric' });

const asUtc = (isoDate: string) => new Date(`${isoDate}T00:00:00Z`);

/** `30 Nov` of `2026-11-30`. */
export function formatDate(isoDate: string): string {
  return shortDate.format(asUtc(isoDate));
}

/** `30 November 2026`. */
export function formatLongDate(isoDate: string): string {
  return longDate.format(asUtc(isoDate));
}

export function formatMonth(isoDate: string): string {
  return monthOnly.format(asUtc(isoDate));
}

export function formatMonthLetter(isoDate: string): string {
  return monthLetter.format(asUtc(isoDate));
}

/** Name of a weekday, 0 = Sunday … 6 = Saturday. */
export function formatWeekday(weekday: number): string {
  return weekdayName.format(new Date(Date.UTC(2023, 0, 1 + weekday)));
}

/** `30 Nov to 6 Dec`, given the word between. */
export function formatWeekDates(weekStart: string, to = 'to'): string {
  return `${formatDate(weekStart)} ${to} ${formatDate(addDays(weekStart, 6))}`;
}

/** `today 09:12`, `27 Nov 14:02`, `3 Jan 2025`; in the person's own time zone. */
export function formatInstant(instant: string, now: Date = new Date(), today = 'today'): string {
  const at = new Date(instant);
  if (Number.isNaN(at.getTime())) return instant;
  if (at.toDateString() === now.toDateString()) return `${today} ${clock.format(at)}`;
  if (at.getFullYear() === now.getFullYear()) return `${localDay.format(at)} ${clock.format(at)}`;
  return localDayOfYear.format(at);
}

/** `2026-W49 to 2027-W08`, or the one week. */
export function formatWeekSpan(firstWeek: string, lastWeek: string, to = 'to'): string {
  return firstWeek === lastWeek ? weekLabel(firstWeek) : `${weekLabel(firstWeek)} ${to} ${weekLabel(lastWeek)}`;
}

export { shortWeekLabel, weekLabel };

export function formatBytes(bytes: number): string {
  if (bytes < 1000) return `${bytes}${noBreakSpace}B`;
  if (bytes < 1_000_000) return `${writeNumber(bytes / 1000, 0)}${noBreakSpace}KB`;
  return `${writeNumber(bytes / 1_000_000, 1)}${noBreakSpace}MB`;
}

/** Decimal and group marks of a locale. */
export function separatorsOf(locale: string = personLocale): { decimal: string; group: string } {
  const parts = new Intl.NumberFormat(locale, { useGrouping: true }).formatToParts(1_234_567.5);
  return {
    decimal: parts.find(({ type }) => type === 'decimal')?.value ?? '.',
    group: parts.find(({ type }) => type === 'group')?.value ?? ',',
  };
}

/**
 * A number as the person writes it: group marks of the locale (or spaces), its decimal mark, a leading `-` or `−`.
 * Null where the text isn't one number.
 */
export function parseLocalNumber(text: string, locale: string = personLocale): number | null {
  const { decimal, group } = separatorsOf(locale);
  const compact = text
    .trim()
    .replace(/[\s’']/g, '')
    .replace(/^−/, '-');
  const escape = (mark: string) => mark.replace(/[.*+?^${}()|[\]\\]/g, '\\$&');
  const grouped = new RegExp(`^[-+]?\\d{1,3}(?:${escape(group)}\\d{3})+(?:${escape(decimal)}\\d+)?$`);
  const plain = new RegExp(`^[-+]?(?:\\d+(?:${escape(decimal)}\\d*)?|${escape(decimal)}\\d+)$`);
  if (!grouped.test(compact) && !plain.test(compact)) return null;
  const value = Number(compact.replaceAll(group, '').replace(decimal, '.'));
  return Number.isFinite(value) ? value : null;
}

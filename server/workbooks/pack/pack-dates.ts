import { addDays, weekLabel } from '../../../shared/domain/weeks.ts';

/** A date as a cell holds it: midnight without a zone, which exceljs takes as UTC. */
export function toCellDate(date: string): Date {
  return new Date(`${date}T00:00:00Z`);
}

/** `27 Nov 2026, 14:02`. */
export function formatInstant(instant: Date, timeZone: string): string {
  return new Intl.DateTimeFormat('en-GB', { dateStyle: 'medium', timeStyle: 'short', timeZone }).format(instant);
}

/** `30 Nov 2026`. */
export function formatDate(date: string): string {
  return new Intl.DateTimeFormat('en-GB', { dateStyle: 'medium', timeZone: 'UTC' }).format(toCellDate(date));
}

/** `December 2026` of `2026-12`. */
export function formatMonth(month: string): string {
  return new Intl.DateTimeFormat('en-GB', { month: 'long', year: 'numeric', timeZone: 'UTC' }).format(
    toCellDate(`${month}-01`),
  );
}

/** `2026-W49 to 2027-W08`, or the one week. */
export function formatWeeks(firstWeek: string, lastWeek: string): string {
  return firstWeek === lastWeek ? weekLabel(firstWeek) : `${weekLabel(firstWeek)} to ${weekLabel(lastWeek)}`;
}

/** Last day of the week that starts so. */
export function lastDayOf(weekStart: string): string {
  return addDays(weekStart, 6);
}

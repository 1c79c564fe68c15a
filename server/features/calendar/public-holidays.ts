import Holidays from 'date-holidays';
import { addDays, startOfTradingWeek, toDayNumber, type Weekday } from '../../../shared/domain/weeks.ts';

export interface HolidayDay {
  name: string;
  /** `YYYY-MM-DD`. */
  date: string;
  /** First day of the trading week that holds the date. */
  weekStart: string;
  /** 0…6 within the trading week. */
  dayInWeek: number;
}

/** Places a named day in its trading week. */
export function placeDay(name: string, date: string, firstWeekday: Weekday): HolidayDay {
  const weekStart = startOfTradingWeek(date, firstWeekday);
  return { name, date, weekStart, dayInWeek: toDayNumber(date) - toDayNumber(weekStart) };
}

/** Public holidays of a country (ISO 3166-1 alpha-2) from `first` to `last`, both included, in order. English names where there are any. */
export function listPublicHolidays(country: string, first: string, last: string, firstWeekday: Weekday): HolidayDay[] {
  const calendar = new Holidays(country, { types: ['public'] });
  const years = Array.from(
    { length: Number(last.slice(0, 4)) - Number(first.slice(0, 4)) + 1 },
    (_, index) => Number(first.slice(0, 4)) + index,
  );
  return years
    .flatMap((year) => calendar.getHolidays(year, 'en'))
    .filter(({ type }) => type === 'public')
    .map(({ name, date }) => ({ name, date: date.slice(0, 10) }))
    .filter(({ date }) => date >= first && date <= last)
    .sort((a, b) => a.date.localeCompare(b.date) || a.name.localeCompare(b.name))
    .map(({ name, date }) => placeDay(name, date, firstWeekday));
}

/** Each day of an event from its first to its last one. */
export function listEventDays(
  event: { name: string; firstDay: string; lastDay: string },
  firstWeekday: Weekday,
): HolidayDay[] {
  const days = toDayNumber(event.lastDay) - toDayNumber(event.firstDay) + 1;
  return Array.from({ length: days }, (_, index) => placeDay(event.name, addDays(event.firstDay, index), firstWeekday));
}

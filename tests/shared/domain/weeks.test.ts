import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  addDays,
  addWeeks,
  easterSunday,
  isIsoDate,
  isoWeekOf,
  listWeeks,
  mondayOfIsoWeek,
  parseWeekLabel,
  startOfTradingWeek,
  toDayNumber,
  toIsoDate,
  weekdayOf,
  weekLabel,
  weeksBetween,
  type Weekday,
} from '../../../shared/domain/weeks.ts';

const anyDate = fc.integer({ min: -10_000, max: 60_000 }).map(toIsoDate);
const anyWeekday = fc.integer({ min: 0, max: 6 }) as fc.Arbitrary<Weekday>;

describe('ISO 8601 weeks', () => {
  // Source: ISO 8601 (the examples of the standard and of its year-end rules).
  it.each([
    ['2005-01-01', 2004, 53, 6],
    ['2008-12-29', 2009, 1, 1],
    ['2010-01-03', 2009, 53, 7],
    ['1985-04-12', 1985, 15, 5],
    ['2027-01-03', 2026, 53, 7],
  ])('names %s %i-W%i-%i', (date, year, week, weekday) => {
    expect(isoWeekOf(date)).toEqual({ year, week, weekday });
  });

  it('finds 71 years of 53 weeks in 400', () => {
    const long = Array.from({ length: 400 }, (_, index) => 2000 + index).filter(
      (year) => mondayOfIsoWeek(year, 53) !== null,
    );
    expect(long).toHaveLength(71);
    expect(long.filter((year) => year < 2040)).toEqual([2004, 2009, 2015, 2020, 2026, 2032, 2037]);
  });
});

describe('Easter', () => {
  // Source: Gregorian computus; the extremes 22 March 1818 and 25 April 1943.
  it.each([
    [2024, '2024-03-31', 13],
    [2025, '2025-04-20', 16],
    [2026, '2026-04-05', 14],
    [2027, '2027-03-28', 12],
    [1818, '1818-03-22', 12],
    [1943, '1943-04-25', 16],
  ])('falls in %i on %s, ISO week %i', (year, date, week) => {
    expect(easterSunday(year)).toBe(date);
    expect(isoWeekOf(date).week).toBe(week);
  });
});

describe('trading weeks', () => {
  it('carry the ISO week of their fourth day', () => {
    expect(weekLabel('2026-11-30')).toBe('2026-W49');
    // Sunday to Saturday: fourth day Wednesday 2 December.
    expect(weekLabel('2026-11-29')).toBe('2026-W49');
    // Thursday to Wednesday: fourth day Sunday 6 December.
    expect(weekLabel('2026-12-03')).toBe('2026-W49');
    expect(weekLabel('2026-12-28')).toBe('2026-W53');
    expect(weekLabel('2027-01-04')).toBe('2027-W01');
  });

  it('are found again from their label, whatever their first weekday', () => {
    fc.assert(
      fc.property(anyDate, anyWeekday, (date, firstWeekday) => {
        const start = startOfTradingWeek(date, firstWeekday);
        expect(parseWeekLabel(weekLabel(start), firstWeekday)).toBe(start);
      }),
    );
  });

  it('never shift: neither at the change of the year nor of daylight saving', () => {
    fc.assert(
      fc.property(anyDate, anyWeekday, fc.integer({ min: -300, max: 300 }), (date, firstWeekday, count) => {
        const start = startOfTradingWeek(date, firstWeekday);
        expect(weekdayOf(start)).toBe(firstWeekday);
        expect(toDayNumber(date) - toDayNumber(start)).toBeGreaterThanOrEqual(0);
        expect(toDayNumber(date) - toDayNumber(start)).toBeLessThan(7);
        const later = addWeeks(start, count);
        expect(weekdayOf(later)).toBe(firstWeekday);
        expect(weeksBetween(start, later)).toBe(count);
        expect(addDays(later, -7 * count)).toBe(start);
      }),
    );
  });

  it('follow each other in a list', () => {
    expect(listWeeks('2026-12-21', 3)).toEqual(['2026-12-21', '2026-12-28', '2027-01-04']);
    expect(listWeeks('2026-12-21', 0)).toEqual([]);
  });

  it('refuse weeks and days that do not exist', () => {
    expect(parseWeekLabel('2025-W53', 1)).toBeNull();
    expect(parseWeekLabel('2026-W00', 1)).toBeNull();
    expect(parseWeekLabel('week 49', 1)).toBeNull();
    expect(isIsoDate('2026-02-29')).toBe(false);
    expect(isIsoDate('2024-02-29')).toBe(true);
    expect(() => toDayNumber('2026-13-01')).toThrow(RangeError);
  });
});

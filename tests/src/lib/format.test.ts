import { describe, expect, it } from 'vitest';
import {
  formatBytes,
  formatFactor,
  formatInstant,
  formatPercent,
  formatSigned,
  formatSignedPercent,
  formatUnits,
  formatWeekday,
  formatWeekSpan,
  parseLocalNumber,
  separatorsOf,
} from '../../../src/lib/format.ts';

describe('figures', () => {
  it('writes a true minus sign and never a negative zero', () => {
    expect(formatUnits(-91)).toBe('−91');
    expect(formatUnits(-0.2)).toBe('0');
    expect(formatSigned(-0.4)).toBe('0');
    expect(formatSigned(840)).toBe('+840');
    expect(formatSigned(0)).toBe('0');
  });

  it('writes fractions as per cent with a space that does not break', () => {
    expect(formatPercent(0.118)).toBe('11.8\u00a0%');
    expect(formatSignedPercent(-0.012)).toBe('−1.2\u00a0%');
    expect(formatFactor(1.05)).toBe('×\u00a01.05');
  });

  it('writes sizes in the unit that people read', () => {
    expect(formatBytes(999)).toBe('999\u00a0B');
    expect(formatBytes(214_000)).toBe('214\u00a0KB');
    expect(formatBytes(3_450_000)).toBe('3.5\u00a0MB');
  });
});

describe('weeks and instants', () => {
  it('names a span by its first and last week, and one week once', () => {
    expect(formatWeekSpan('2026-11-30', '2027-02-22')).toBe('2026-W49 to 2027-W08');
    expect(formatWeekSpan('2026-11-30', '2026-11-30')).toBe('2026-W49');
  });

  it('counts weekdays from Sunday', () => {
    expect([0, 1, 6].map(formatWeekday)).toEqual(['Sunday', 'Monday', 'Saturday']);
  });

  it('says today with the clock, this year with day and clock, else the day alone', () => {
    const now = new Date(2026, 11, 1, 15, 0);
    expect(formatInstant(new Date(2026, 11, 1, 9, 12).toISOString(), now)).toBe('today 09:12');
    expect(formatInstant(new Date(2026, 10, 27, 14, 2).toISOString(), now)).toMatch(/27.*14:02/);
    expect(formatInstant(new Date(2025, 0, 3).toISOString(), now)).toMatch(/2025/);
  });
});

describe('numbers as a person writes them', () => {
  it.each([
    ['1,204', 'en-GB', 1204],
    ['1,204.5', 'en-GB', 1204.5],
    ['-12', 'en-GB', -12],
    ['−12', 'en-GB', -12],
    ['1.204,5', 'de-DE', 1204.5],
    ['0,75', 'de-DE', 0.75],
    ['1 204,5', 'fr-FR', 1204.5],
  ])('reads %s in %s as %d', (text, locale, value) => {
    expect(parseLocalNumber(text, locale)).toBe(value);
  });

  it.each(['', 'n/a', '1,20', '12,34,5', '1.2.3', '--4'])('refuses %j rather than guess', (text) => {
    expect(parseLocalNumber(text, 'en-GB')).toBeNull();
  });

  it('knows the marks of a locale', () => {
    expect(separatorsOf('de-DE')).toEqual({ decimal: ',', group: '.' });
  });
});

import { describe, expect, it } from 'vitest';
import { detectDecimalSign, readNumber, readShare } from '../../../server/workbooks/reading/number-reading.ts';
import { readWeekCell, resolveWeekStart } from '../../../server/workbooks/reading/week-reading.ts';
import type { CellValue } from '../../../server/workbooks/reading/table.ts';

const valueOf = (text: CellValue, sign: '.' | ',' = '.') => {
  const reading = readNumber(text, sign);
  return reading === null || reading === 'unreadable' ? reading : reading.value;
};

describe('reading numbers', () => {
  it.each<[CellValue, '.' | ',', number]>([
    [12.5, '.', 12.5],
    ['12.5', '.', 12.5],
    ['12,5', ',', 12.5],
    ['1,234.50', '.', 1234.5],
    ['1.234,50', ',', 1234.5],
    ['1 234,50', ',', 1234.5],
    ['1\u00a0234', '.', 1234],
    ["1'234.50", '.', 1234.5],
    ['12-', '.', -12],
    ['(12.5)', '.', -12.5],
    ['\u221212', '.', -12],
    ['+3', '.', 3],
    ['€ 3,49', ',', 3.49],
    ['3.49 EUR', '.', 3.49],
    ['$1,000', '.', 1000],
    ['25%', '.', 0.25],
    ['25,5 %', ',', 0.255],
    ['1.5E+3', '.', 1500],
    ['.5', '.', 0.5],
    [true, '.', 1],
  ])('reads %j with decimal %s as %d', (cell, sign, value) => {
    expect(valueOf(cell, sign)).toBeCloseTo(value, 12);
  });

  it.each(['', ' ', '-', 'n/a', 'NULL'])('reads %j as no number at all', (text) => {
    expect(valueOf(text)).toBeNull();
  });

  it.each<[CellValue, '.' | ',']>([
    ['twelve', '.'],
    ['1,23', '.'],
    ['1.23', ','],
    ['1,2345', '.'],
    ['12,34,567', '.'],
    ['1.2.3', '.'],
    ['#N/A', '.'],
    ['2026-01-05', '.'],
    [{ date: '2026-01-05' }, '.'],
    ['Infinity', '.'],
    ['0x10', '.'],
    [1e15, '.'],
    ['--3', '.'],
  ])('refuses %j with decimal %s rather than guess', (cell, sign) => {
    expect(valueOf(cell, sign)).toBe('unreadable');
  });

  it('finds the decimal sign that a text proves', () => {
    expect(['12.5', '1,234.5', '1,234,567', '0.125'].map(detectDecimalSign)).toEqual(['.', '.', '.', '.']);
    expect(['12,5', '1.234,5', '1.234.567', '0,125'].map(detectDecimalSign)).toEqual([',', ',', ',', ',']);
    expect(['1.234', '1,234', '12', 'x'].map(detectDecimalSign)).toEqual(['either', 'either', null, null]);
  });

  it('reads shares as fractions, percents or yes and no', () => {
    const shareOf = (cell: CellValue, scale: 'fraction' | 'percent') =>
      (readShare(cell, '.', scale) as { value: number }).value;
    expect([
      shareOf(0.25, 'fraction'),
      shareOf(25, 'percent'),
      shareOf('25%', 'percent'),
      shareOf('25%', 'fraction'),
    ]).toEqual([0.25, 0.25, 0.25, 0.25]);
    expect([
      shareOf('yes', 'percent'),
      shareOf('x', 'fraction'),
      shareOf('No', 'fraction'),
      shareOf(true, 'percent'),
    ]).toEqual([1, 1, 0, 1]);
  });
});

describe('reading weeks', () => {
  const form = { dateOrder: 'day-first', yearNumberIs: 'week', hasDatesFrom1904: false } as const;
  const label = { type: 'label', year: 2026, week: 49 };
  const date = { type: 'date', date: '2026-11-30' };

  it.each([
    '2026-W49',
    '2026W49',
    '2026 w49',
    'W49 2026',
    'Week 49/2026',
    '2026 week 49',
    202649,
    '202649',
    '49/2026',
    '2026-49',
  ])('reads %j as the named week', (cell) => {
    expect(readWeekCell(cell, form)).toEqual(label);
  });

  it.each<CellValue>([
    { date: '2026-11-30' },
    '2026-11-30',
    '2026/11/30',
    '2026-11-30T00:00:00',
    '20261130',
    20261130,
    '30.11.2026',
    '30.11.26',
    '30/11/2026',
    '11/30/2026',
    '30-Nov-2026',
    '30 November 2026',
    'Nov 30, 2026',
    'Mon 30/11/2026',
    'Monday, 30 November 2026',
    'Week of 30/11/2026',
    46356,
    '46356',
    '2026-W49-1',
  ])('reads %j as the date', (cell) => {
    expect(readWeekCell(cell, form)).toEqual(date);
  });

  it('reads an ambiguous date by the order that is set, and points as day first', () => {
    expect(readWeekCell('03/02/2026', form)).toEqual({ type: 'date', date: '2026-02-03' });
    expect(readWeekCell('03/02/2026', { ...form, dateOrder: 'month-first' })).toEqual({
      type: 'date',
      date: '2026-03-02',
    });
    expect(readWeekCell('03.02.2026', { ...form, dateOrder: 'month-first' })).toEqual({
      type: 'date',
      date: '2026-02-03',
    });
  });

  it.each(['Nov 2026', 202611, '2026-11', '11/2026'])('reads %j as a month where the column holds months', (cell) => {
    expect(readWeekCell(cell, { ...form, yearNumberIs: 'month' })).toEqual({ type: 'month', year: 2026, month: 11 });
  });

  it.each<CellValue>([
    '2025-W53',
    '2026-W54',
    '2026-W00',
    '30.02.2026',
    '2026-13-01',
    'soon',
    49,
    'W49',
    3.5,
    null,
    true,
    'Total',
  ])('refuses %j rather than guess', (cell) => {
    expect(readWeekCell(cell, form)).toEqual({ type: 'unreadable' });
  });

  it('finds the trading week by its fourth day for a named week, by its edge for a date', () => {
    const named = { type: 'label', year: 2026, week: 49 } as const;
    expect(resolveWeekStart(named, { firstWeekday: 1, weekDateIs: 'first-day' })).toBe('2026-11-30');
    expect(resolveWeekStart(named, { firstWeekday: 4, weekDateIs: 'first-day' })).toBe('2026-12-03');
    const sunday = { type: 'date', date: '2026-12-06' } as const;
    expect(resolveWeekStart(sunday, { firstWeekday: 1, weekDateIs: 'last-day' })).toBe('2026-11-30');
    expect(resolveWeekStart(sunday, { firstWeekday: 0, weekDateIs: 'first-day' })).toBe('2026-12-06');
    expect(resolveWeekStart(sunday, { firstWeekday: 1, weekDateIs: 'first-day' })).toBeNull();
  });
});

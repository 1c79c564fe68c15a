import { describe, expect, it } from 'vitest';
import type { ImportMapping } from '../../../../shared/contracts/sales.ts';
import { columnLetter, giveMeaning, isSameMapping, listMissing } from '../../../../src/features/sales/mapping.ts';

const mapping: ImportMapping = {
  kind: 'sales',
  sheet: 'Sales',
  headerRow: 3,
  columns: [
    { index: 0, header: 'Week', meaning: 'week', confidence: 1 },
    { index: 1, header: 'Article', meaning: 'item', confidence: 0.9 },
    { index: 2, header: 'Sold', meaning: 'units', confidence: 0.6 },
    { index: 3, header: 'Coupon ', meaning: 'ignore', confidence: 0.2 },
  ],
  decimalMark: '.',
  weekDateIs: 'first-day',
  firstWeekday: 1,
  valueIncludesVat: false,
  categoryId: null,
  lineId: null,
  newLineName: null,
};

it('letters columns as spreadsheets do', () => {
  expect([0, 25, 26, 51, 52, 701, 702].map(columnLetter)).toEqual(['A', 'Z', 'AA', 'AZ', 'BA', 'ZZ', 'AAA']);
});

describe('a meaning given by hand', () => {
  it('is taken from the column that had it, for only one column can hold it', () => {
    const changed = giveMeaning(mapping, 3, 'units');
    expect(changed.columns.map(({ meaning }) => meaning)).toEqual(['week', 'item', 'ignore', 'units']);
    expect(mapping.columns[2]?.meaning).toBe('units');
  });

  it('of a mechanic proposes the header as its name and leaves other mechanics alone', () => {
    const once = giveMeaning(mapping, 3, 'mechanic');
    expect(once.columns[3]).toMatchObject({ meaning: 'mechanic', mechanicName: 'coupon' });
    const twice = giveMeaning(once, 2, 'mechanic');
    expect(twice.columns[3]?.meaning).toBe('mechanic');
  });
});

describe('what is missing', () => {
  it('is nothing when week, item and units are known', () => {
    expect(listMissing(mapping)).toEqual([]);
  });

  it('names each column that is needed', () => {
    expect(listMissing(giveMeaning(giveMeaning(mapping, 0, 'ignore'), 2, 'ignore'))).toEqual(['week', 'units']);
  });

  it('asks a file of plans for something planned instead of units', () => {
    const plans = { ...mapping, kind: 'calendar' as const };
    expect(listMissing(plans)).toEqual(['planned']);
    expect(listMissing(giveMeaning(plans, 2, 'depth'))).toEqual([]);
  });

  it('asks for the name of a mechanic', () => {
    const named = giveMeaning(mapping, 3, 'mechanic');
    const blank = { ...named, columns: named.columns.map((column) => ({ ...column, mechanicName: ' ' })) };
    expect(listMissing(blank)).toEqual(['mechanic']);
  });
});

it('tells a changed reading from the same one, whatever the confidence', () => {
  const surer = { ...mapping, columns: mapping.columns.map((column) => ({ ...column, confidence: 1 })) };
  expect(isSameMapping(mapping, surer)).toBe(true);
  expect(isSameMapping(mapping, { ...mapping, decimalMark: ',' })).toBe(false);
  expect(isSameMapping(mapping, giveMeaning(mapping, 3, 'price'))).toBe(false);
});

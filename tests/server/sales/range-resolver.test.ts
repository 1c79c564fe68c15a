import { describe, expect, it } from 'vitest';
import {
  RangeResolver,
  type RangeSnapshot,
  type ResolverChoices,
} from '../../../server/features/sales/range-resolver.ts';

const range: RangeSnapshot = {
  categories: [
    { id: 1, name: 'Tea' },
    { id: 2, name: 'Coffee' },
  ],
  lines: [
    { id: 11, name: 'Green', categoryId: 1 },
    { id: 12, name: 'Black', categoryId: 1 },
    { id: 21, name: 'Black', categoryId: 2 },
  ],
  items: [
    { id: 101, code: 'T1', name: 'Sencha', lineId: 11, categoryId: 1 },
    { id: 102, code: 'T2', name: 'Twin', lineId: 12, categoryId: 1 },
    { id: 103, code: 'T3', name: 'Twin', lineId: 12, categoryId: 1 },
    { id: 201, code: 'C1', name: 'Mocha', lineId: 21, categoryId: 2 },
    { id: 301, code: 'X1', name: 'Adrift', lineId: null, categoryId: null },
  ],
  locations: [
    { id: 1, code: 'N', name: 'North' },
    { id: 2, code: 'S', name: 'South' },
  ],
};
const everywhere: ResolverChoices = {
  permittedCategories: null,
  categoryId: null,
  lineId: null,
  newLineName: null,
  mayCreate: true,
};

describe('names in a file', () => {
  it('are found by code, then by name, in upper and lower case alike', () => {
    const resolver = new RangeResolver(range, everywhere);
    expect(resolver.resolve({ item: 't1', location: 'north' })).toEqual({ item: 0, location: 0, notice: null });
    expect(resolver.resolve({ item: 'SENCHA', location: 'N' })).toEqual({ item: 0, location: 0, notice: null });
    expect(resolver.resolve({ item: 'C1', location: 's' })).toEqual({ item: 1, location: 1, notice: null });
    expect(resolver.items.map(({ id }) => id)).toEqual([101, 201]);
    expect(resolver.hasAliases).toBe(true);
    expect(resolver.listUnknown()).toEqual({ categories: [], lines: [], items: [], locations: [] });
  });

  it('that several items share are refused with the codes to choose from', () => {
    const refused = new RangeResolver(range, everywhere).resolve({ item: 'twin', location: 'N' });
    expect(refused).toMatchObject({ kind: 'ambiguous-item', detail: expect.stringContaining('T2, T3') as string });
  });

  it('of items without a line are refused', () => {
    expect(new RangeResolver(range, everywhere).resolve({ item: 'X1', location: 'N' })).toMatchObject({
      kind: 'item-in-no-line',
    });
  });

  it('lead a new item to the line of its category where two categories have one of that name', () => {
    const resolver = new RangeResolver(range, everywhere);
    resolver.resolve({ item: 'C9', category: 'coffee', line: 'BLACK', location: 'N' });
    expect(resolver.items[0]).toMatchObject({ id: null, categoryId: 2, lineId: 21, lineName: null });
    expect(resolver.missingChoice).toBeNull();
  });

  it('lead a new item without a category to the one line of that name among the person’s categories', () => {
    const resolver = new RangeResolver(range, { ...everywhere, permittedCategories: [2] });
    resolver.resolve({ item: 'C9', line: 'Black', location: 'N' });
    expect(resolver.items[0]).toMatchObject({ categoryId: 2, lineId: 21 });
  });

  it('ask for a category, then for a line, where the file names none', () => {
    const without = new RangeResolver(range, everywhere);
    without.resolve({ item: 'NEW', location: 'N' });
    expect(without.missingChoice).toBe('category');
    const withCategory = new RangeResolver(range, { ...everywhere, categoryId: 1 });
    withCategory.resolve({ item: 'NEW', location: 'N' });
    expect(withCategory.missingChoice).toBe('line');
    const withBoth = new RangeResolver(range, { ...everywhere, categoryId: 1, newLineName: 'green' });
    withBoth.resolve({ item: 'NEW', location: 'N' });
    expect(withBoth.missingChoice).toBeNull();
    expect(withBoth.items[0]).toMatchObject({ lineId: 11, lineName: null });
  });

  it('lead new items without a category to where all known items of the file are, and nowhere if these are in two', () => {
    const alone = new RangeResolver(range, everywhere);
    alone.resolve({ item: 'NEW', line: 'black', location: 'N' });
    alone.resolve({ item: 'C1', location: 'N' });
    expect(alone.missingChoice).toBe('category');
    alone.settle();
    expect(alone.items[0]).toMatchObject({ categoryId: 2, lineId: 21 });
    expect(alone.missingChoice).toBeNull();

    const mixed = new RangeResolver(range, everywhere);
    for (const item of ['NEW', 'C1', 'T1']) mixed.resolve({ item, line: 'Other', location: 'N' });
    mixed.settle();
    expect(mixed.items[0]).toMatchObject({ categoryId: null });
    expect(mixed.missingChoice).toBe('category');
  });

  it('that say another line than the item’s own are taken, and told once', () => {
    const resolver = new RangeResolver(range, everywhere);
    const first = resolver.resolve({ item: 'T1', line: 'Black', location: 'N' });
    expect(first).toMatchObject({ item: 0, notice: { kind: 'item-in-other-line' } });
    expect(resolver.resolve({ item: 'T1', line: 'Black', location: 'S' })).toMatchObject({ notice: null });
  });

  it('of a new line in a foreign category are refused', () => {
    const resolver = new RangeResolver(range, { ...everywhere, permittedCategories: [1] });
    expect(resolver.resolve({ item: 'C9', category: 'Coffee', line: 'Decaf', location: 'N' })).toMatchObject({
      kind: 'category-not-yours',
    });
    expect(resolver.resolve({ item: 'C1', location: 'N' })).toMatchObject({ kind: 'category-not-yours' });
    expect(resolver.items).toEqual([]);
  });
});

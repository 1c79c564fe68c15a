import { describe, expect, it } from 'vitest';
import { findByName } from '../../../src/app/find.ts';
import { placeOf } from '../../../src/app/places.ts';

it.each([
  ['/', 'waiting'],
  ['/sales/imports/7', 'sales'],
  ['/plan/3', 'plan'],
  ['/lines/3', 'plan'],
  ['/settings/people', null],
  ['/salesmen', null],
])('%s belongs to %s', (path, place) => {
  expect(placeOf(path)).toBe(place);
});

describe('Find', () => {
  const categories = [
    { id: 1, name: 'Hot drinks', lastSalesWeek: '2026-11-23', lines: [{ id: 4, name: 'Ground coffee' }] },
    { id: 2, name: 'Pantry', lastSalesWeek: null, lines: [{ id: 5, name: 'Ground spices' }] },
  ];
  const calendar = {
    category: { id: 1, name: 'Hot drinks' },
    firstWeek: '2026-11-23',
    weeks: 10,
    lines: [{ id: 4, name: 'Ground coffee', items: [{ id: 9, name: 'Café roast 500 g' }] }],
    locations: [],
    promotions: [
      {
        name: 'Advent feature',
        firstWeek: '2026-12-07',
        lastWeek: '2026-12-14',
        itemIds: [9],
        locationIds: [],
        depth: 0.2,
        feature: 1,
        display: 0,
        mechanics: {},
      },
    ],
    prices: [],
    holidays: [],
    revision: 1,
  };

  it('finds lines of every category by the beginnings of their words', () => {
    expect(findByName('gro co', categories, calendar).map(({ name }) => name)).toEqual(['Ground coffee']);
    expect(findByName('ground', categories, null).map(({ name }) => name)).toEqual(['Ground coffee', 'Ground spices']);
  });

  it('passes over accents and leads to the item’s line', () => {
    expect(findByName('cafe', categories, calendar)).toMatchObject([
      { kind: 'item', link: '/plan/4?category=1&item=9' },
    ]);
  });

  it('finds promotions and leads to their weeks', () => {
    expect(findByName('advent', categories, calendar)).toMatchObject([
      { kind: 'promotion', link: '/calendar?category=1&from=2026-12-07' },
    ]);
  });

  it('finds nothing for nothing', () => {
    expect(findByName('  ', categories, calendar)).toEqual([]);
    expect(findByName('zzz', categories, calendar)).toEqual([]);
  });
});

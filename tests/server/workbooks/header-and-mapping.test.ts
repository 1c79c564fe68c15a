import { describe, expect, it } from 'vitest';
import { findHeader } from '../../../server/workbooks/reading/header.ts';
import { inspectTable } from '../../../server/workbooks/reading/inspect-table.ts';
import {
  fingerprintHeader,
  listMissingMeanings,
  proposeKind,
  proposeMapping,
} from '../../../server/workbooks/reading/mapping.ts';
import type { CellValue, TableRow } from '../../../server/workbooks/reading/table.ts';
import { makeTable } from './workbook-files.ts';

const toRows = (rows: CellValue[][]): TableRow[] => rows.map((cells, index) => ({ sheet: 'S', row: index + 1, cells }));

describe('finding the header', () => {
  it('takes the first row of a plain table', () => {
    const rows = toRows([
      ['week', 'item', 'units'],
      ['2026-W01', 'A1', 3],
      ['2026-W01', 'A2', 4],
    ]);
    expect(findHeader(rows)).toEqual({ row: 1, names: ['week', 'item', 'units'] });
  });

  it('passes over titles, notes and blank rows above it', () => {
    const rows = toRows([
      ['Weekly sales, all regions'],
      ['Printed', { date: '2026-12-01' }],
      [],
      ['Region:', 'North', null, 'Buyer:', 'J. Doe'],
      ['Week ending', 'Article No.', 'Description', 'Store', 'Qty sold', 'Net sales'],
      [{ date: '2026-11-29' }, 4711, 'Ground coffee 500 g', 'S01', 12, 40.5],
      [{ date: '2026-11-29' }, 4712, 'Espresso beans 1 kg', 'S01', 3, 36],
    ]).filter((row) => row.cells.length > 0);
    expect(findHeader(rows)?.row).toBe(5);
  });

  it('finds none where no row names columns', () => {
    expect(
      findHeader(
        toRows([
          [1, 2, 3],
          [4, 5, 6],
        ]),
      ),
    ).toBeNull();
    expect(findHeader(toRows([['Only a title']]))).toBeNull();
  });
});

describe('proposing what columns mean', () => {
  it('takes a single 3 among ones for a slip, and mostly larger figures for percents', () => {
    const scaleOf = (shares: number[]) => {
      const rows = toRows(shares.map((share, index) => ['2026-W48', `A${index}`, 5, share] as CellValue[]));
      return proposeMapping(['Week', 'Item no.', 'Units', 'Feature'], rows)[3]!.scale;
    };
    expect(scaleOf([1, 0, 1, 1, 3, 0, 1, 1, 0, 0, 1, 1])).toBe('fraction');
    expect(scaleOf([0, 20, 0, 100, 35])).toBe('percent');
  });

  it('is certain of the canonical file', () => {
    const names =
      'week,category,line,item,location,units,net_value,price,regular_price,feature,display,promo_coupon,promo_multibuy,gap'.split(
        ',',
      );
    const row = ['2026-W01', 'Coffee', 'Ground', 'A1', 'S01', 3, 9.6, 3.2, 3.5, 0, 1, 0, 0.5, 0] as CellValue[];
    const columns = proposeMapping(names, toRows([row]));
    expect(columns.map(({ meaning, mechanic }) => mechanic ?? meaning)).toEqual([
      'week',
      'category',
      'line',
      'item',
      'location',
      'units',
      'netValue',
      'price',
      'regularPrice',
      'feature',
      'display',
      'coupon',
      'multibuy',
      'gap',
    ]);
    expect(columns.every(({ confidence, reason }) => confidence === 1 && reason === 'canonical')).toBe(true);
    expect(proposeKind(columns)).toBe('sales');
  });

  const body: CellValue[] = [
    { date: '2026-11-29' },
    'C-4711',
    'Ground coffee 500 g',
    'Hill Street',
    12,
    40.5,
    3.38,
    3.99,
    15,
    'yes',
    0,
    'Autumn deal',
    0.1,
  ];
  it.each([
    [
      'W/E',
      'SKU',
      'Product',
      'Store',
      'Qty',
      'Net Sales (EUR)',
      'Avg. price',
      'Shelf price',
      'Discount %',
      'Leaflet',
      'End cap',
      'Campaign',
      'OOS share',
    ],
    [
      'Week ending',
      'Article No.',
      'Article description',
      'Branch',
      'Units sold',
      'Turnover',
      'Price paid',
      'List price',
      'Price cut',
      'Featured',
      'Second placement',
      'Promotion',
      'Out of stock',
    ],
    [
      'date',
      'ItemCode',
      'Name',
      'Location',
      'Volume',
      'Value',
      'Unit Price',
      'RRP',
      'Promo depth',
      'Advertised',
      'Display',
      'Offer name',
      'Gap',
    ],
  ])('understands the words of the trade: %s, %s, %s …', (...names) => {
    const columns = proposeMapping(names, toRows([body, body, body]));
    expect(columns.map(({ meaning }) => meaning)).toEqual([
      'week',
      'item',
      'itemName',
      'location',
      'units',
      'netValue',
      'price',
      'regularPrice',
      'depth',
      'feature',
      'display',
      'promotionName',
      'gap',
    ]);
    expect(columns.every(({ confidence }) => confidence < 1 && confidence > 0.5)).toBe(true);
    expect(columns[8]!.scale).toBe('percent');
  });

  it('believes the cells where they contradict the name', () => {
    const rows = toRows([
      ['Beans', 'A1', 'many'],
      ['Beans', 'A2', 'few'],
    ]);
    expect(proposeMapping(['Week', 'Item', 'Units'], rows).map(({ meaning }) => meaning)).toEqual([
      'ignore',
      'item',
      'ignore',
    ]);
  });

  it('finds weeks by their look under a name that says nothing, and gives a meaning to one column only', () => {
    const rows = toRows([
      ['2026-W01', 'A1', 3, 5],
      ['2026-W02', 'A1', 4, 6],
    ]);
    const columns = proposeMapping(['KW', 'Item', 'Units', 'Quantity'], rows);
    expect(columns.map(({ meaning }) => meaning)).toEqual(['week', 'item', 'units', 'ignore']);
    expect(columns[0]).toMatchObject({ reason: 'content' });
  });

  it('lets names tell items apart where there are no codes', () => {
    const rows = toRows([['2026-W01', 'Ground coffee', 3]]);
    expect(proposeMapping(['Week', 'Description', 'Units'], rows)[1]!.meaning).toBe('item');
  });

  it('takes a file without units for a calendar, and says what is missing', () => {
    const calendar = proposeMapping(['week', 'item', 'price', 'promo_coupon'], toRows([['2026-W01', 'A1', 3.5, 1]]));
    expect(proposeKind(calendar)).toBe('calendar');
    expect(listMissingMeanings(calendar)).toEqual([]);
    const neither = proposeMapping(['week', 'supplier'], toRows([['2026-W01', 'Acorn']]));
    expect(proposeKind(neither)).toBeNull();
    expect(listMissingMeanings(neither)).toEqual(['item', 'units']);
  });

  it('knows files with alike columns again, whatever the spelling', () => {
    expect(fingerprintHeader(['Net Sales', 'Item No.', ''])).toBe(fingerprintHeader(['net_sales', 'ITEM NO']));
    expect(fingerprintHeader(['Net Sales', 'Item'])).not.toBe(fingerprintHeader(['Item', 'Net Sales']));
    expect(fingerprintHeader(['Артикул'])).not.toBe(fingerprintHeader(['Неделя']));
  });
});

describe('looking into a file', () => {
  const inspect = (rows: CellValue[][], fixedFirstWeekday: null | 0 | 1 | 4 = null) =>
    inspectTable(makeTable(rows, 'csv'), { fixedFirstWeekday });
  const salesOn = (weeks: CellValue[], name = 'week', units: CellValue = 3): CellValue[][] => [
    [name, 'item', 'units'],
    ...weeks.map((week): CellValue[] => [week, 'A1', units]),
  ];

  it('takes the first weekday from the dates of the file', async () => {
    const { form, questions, refusal } = await inspect(salesOn(['2026-11-05', '2026-11-12', '2026-11-19']));
    expect(form).toMatchObject({ firstWeekday: 4, weekDateIs: 'first-day' });
    expect([questions, refusal]).toEqual([[], null]);
  });

  it('takes dates for last days where the name says so or the settled weekday does', async () => {
    expect((await inspect(salesOn(['2026-11-08', '2026-11-15'], 'Week ending'))).form).toMatchObject({
      firstWeekday: 1,
      weekDateIs: 'last-day',
    });
    expect((await inspect(salesOn(['2026-11-08', '2026-11-15']), 1)).form).toMatchObject({
      firstWeekday: 1,
      weekDateIs: 'last-day',
    });
  });

  it('asks where a Sunday could open or close the week, and where dates fall on several weekdays', async () => {
    expect((await inspect(salesOn(['2026-11-08', '2026-11-15']))).questions).toEqual(['week-date-is']);
    expect((await inspect(salesOn(['2026-11-02', '2026-11-10', '2026-11-18', '2026-11-26']))).questions).toEqual([
      'first-weekday',
    ]);
    expect((await inspect(salesOn(['2026-11-04', '2026-11-11']), 1)).questions).toEqual(['first-weekday']);
  });

  it('tells day first from month first by proof, then by the weekday that weekly dates share, else asks', async () => {
    expect((await inspect(salesOn(['02/11/2026', '30/11/2026']))).form.dateOrder).toBe('day-first');
    expect((await inspect(salesOn(['11/02/2026', '11/30/2026']))).form.dateOrder).toBe('month-first');
    const shared = await inspect(salesOn(['11/02/2026', '11/09/2026', '12/07/2026']));
    expect([shared.form.dateOrder, shared.form.firstWeekday, shared.questions]).toEqual(['month-first', 1, []]);
    expect((await inspect(salesOn(['01/02/2026']))).questions).toContain('date-order');
  });

  it('finds the decimal sign or asks', async () => {
    expect((await inspect(salesOn(['2026-W01'], 'week', '12,5'))).form.decimalSign).toBe(',');
    expect((await inspect(salesOn(['2026-W01'], 'week', '12.5'))).form.decimalSign).toBe('.');
    expect((await inspect(salesOn(['2026-W01'], 'week', '1.234'))).questions).toEqual(['decimal-sign']);
  });

  it('refuses daily and monthly figures with a reason', async () => {
    const days = Array.from({ length: 20 }, (_, day) => `2026-11-${String(day + 1).padStart(2, '0')}`);
    expect((await inspect(salesOn(days, 'date'))).refusal?.code).toBe('daily-figures');
    expect(
      (await inspect(salesOn(['2026-01-01', '2026-02-01', '2026-03-01', '2026-04-01', '2026-05-01'], 'date'))).refusal
        ?.code,
    ).toBe('monthly-figures');
    expect((await inspect(salesOn(['Jan 2026', 'Feb 2026', 'Mar 2026'], 'period'))).refusal?.code).toBe(
      'monthly-figures',
    );
    expect((await inspect(salesOn([202601, 202602], 'month'))).refusal?.code).toBe('monthly-figures');
    expect((await inspect(salesOn([202601, 202602], 'week'))).refusal).toBeNull();
  });

  it('reads sheets with the same columns together and names those left out', async () => {
    const first = makeTable(salesOn(['2026-W01']), 'xlsx', 'North');
    const second = makeTable(salesOn(['2026-W02']), 'xlsx', 'South');
    const notes = makeTable(
      [
        ['Author', 'Remark'],
        ['me', 'none'],
      ],
      'xlsx',
      'Notes',
    );
    const table = { ...first, sheets: [...notes.sheets, ...first.sheets, ...second.sheets] };
    const { mapping, skippedSheets } = await inspectTable(table, { fixedFirstWeekday: null });
    expect(mapping.sheets).toEqual([
      { name: 'North', headerRow: 1 },
      { name: 'South', headerRow: 1 },
    ]);
    expect(skippedSheets).toEqual([{ name: 'Notes', reason: 'other columns' }]);
  });
});

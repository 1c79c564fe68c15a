import { describe, expect, it } from 'vitest';
import { inspectTable, type ReadingForm } from '../../../server/workbooks/reading/inspect-table.ts';
import { readImportRows, type ImportFinding, type ImportRow } from '../../../server/workbooks/reading/import-rows.ts';
import type { ImportKind } from '../../../server/workbooks/reading/mapping.ts';
import type { CellValue, OpenedTable } from '../../../server/workbooks/reading/table.ts';
import { makeTable } from './workbook-files.ts';

const TODAY = '2026-12-01';

async function importFrom(table: OpenedTable, changes: { form?: Partial<ReadingForm>; kind?: ImportKind } = {}) {
  const inspection = await inspectTable(table, { fixedFirstWeekday: null });
  const form = { ...inspection.form, ...changes.form };
  const reading = readImportRows(table, inspection.mapping, {
    kind: changes.kind ?? inspection.kind!,
    form,
    today: TODAY,
  });
  const rows: ImportRow[] = [];
  const findings: ImportFinding[] = [];
  for await (const batch of reading.batches()) {
    rows.push(...batch.rows);
    findings.push(...batch.findings);
  }
  return { rows, findings, totals: reading.totals() };
}

const HEADER: CellValue[] = ['week', 'item', 'location', 'units', 'net_value', 'price', 'feature'];
const sales = (...rows: CellValue[][]) => makeTable([HEADER, ['2026-W40', 'A1', 'S1', 3, 9, 3, 0], ...rows], 'csv');

describe('applying a mapping to the rows of a file', () => {
  it('yields a parsed row for each good row and totals that agree with it', async () => {
    const { rows, findings, totals } = await importFrom(
      sales(['2026-W41', 'A1', 'S2', '4', '10.5', '', '0.5'], ['2026-W41', 'A2', 'S2', -1, -3, 3, 1]),
    );
    expect(rows).toEqual([
      {
        sheet: 'Sales',
        row: 2,
        weekStart: '2026-09-28',
        item: 'A1',
        location: 'S1',
        units: 3,
        netValue: 9,
        price: 3,
        feature: 0,
        mechanics: {},
      },
      {
        sheet: 'Sales',
        row: 3,
        weekStart: '2026-10-05',
        item: 'A1',
        location: 'S2',
        units: 4,
        netValue: 10.5,
        feature: 0.5,
        mechanics: {},
      },
      {
        sheet: 'Sales',
        row: 4,
        weekStart: '2026-10-05',
        item: 'A2',
        location: 'S2',
        units: -1,
        netValue: -3,
        price: 3,
        feature: 1,
        mechanics: {},
      },
    ]);
    expect(findings).toMatchObject([{ cell: 'D4', kind: 'negative-units', verdict: 'noticed' }]);
    expect(totals).toEqual({
      rowsTaken: 3,
      rowsRefused: 0,
      weeks: 2,
      items: 2,
      locations: 2,
      units: 6,
      netValue: 16.5,
      firstWeek: '2026-09-28',
      lastWeek: '2026-10-05',
      findings: { 'negative-units': 1 },
    });
  });

  it.each<[string, CellValue[], string, string | null]>([
    ['week-unreadable', ['soon', 'A1', 'S1', 3], 'A3', 'soon'],
    ['week-unreadable', [null, 'A1', 'S1', 3], 'A3', null],
    ['week-off-weekday', ['2026-10-06', 'A1', 'S1', 3], 'A3', '2026-10-06'],
    ['week-too-early', ['1979-W02', 'A1', 'S1', 3], 'A3', '1979-W02'],
    ['week-too-late', ['2039-W02', 'A1', 'S1', 3], 'A3', '2039-W02'],
    ['item-missing', ['2026-W41', null, 'S1', 3], 'B3', null],
    ['location-missing', ['2026-W41', 'A1', null, 3], 'C3', null],
    ['units-missing', ['2026-W41', 'A1', 'S1', null, 9], 'D3', null],
    ['number-unreadable', ['2026-W41', 'A1', 'S1', 'three'], 'D3', 'three'],
    ['number-unreadable', ['2026-W41', 'A1', 'S1', 3, '#N/A'], 'E3', '#N/A'],
    ['negative-price', ['2026-W41', 'A1', 'S1', 3, 9, -3], 'F3', '-3'],
    ['share-outside', ['2026-W41', 'A1', 'S1', 3, 9, 3, -0.5], 'G3', '-0.5'],
    ['duplicate-row', ['2026-W40', 'A1', 'S1', 5], 'A3', null],
    ['subtotal-row', [null, 'Total', null, 30], 'A3', null],
    ['subtotal-row', ['Grand total', null, null, 30], 'A3', null],
    ['repeated-header', HEADER, 'A3', 'week'],
    ['text-too-long', ['2026-W41', 'x'.repeat(300), 'S1', 3], 'B3', 'x'.repeat(100)],
  ])('refuses a row as %s and takes the others', async (kind, row, cell, before) => {
    const { rows, findings, totals } = await importFrom(sales(row, ['2026-W42', 'A1', 'S1', 4]));
    expect(rows.map(({ row }) => row)).toEqual([2, 4]);
    expect(findings).toMatchObject([{ sheet: 'Sales', row: 3, kind, cell, before, after: null, verdict: 'refused' }]);
    expect(findings[0]!.detail).toMatch(/[.]$/);
    expect(totals).toMatchObject({ rowsTaken: 2, rowsRefused: 1, findings: { [kind]: 1 } });
  });

  it('keeps rows of the same week at other locations and finds a duplicate far behind its first, weeks in any order', async () => {
    const rows: CellValue[][] = [];
    for (let week = 52; week >= 1; week -= 1) {
      for (const year of [2025, 1999, 2026])
        rows.push(
          [`${year}-W${String(week).padStart(2, '0')}`, 'B1', 'S1', 1],
          [`${year}-W${String(week).padStart(2, '0')}`, 'B1', 'S2', 1],
        );
    }
    const { findings, totals } = await importFrom(sales(...rows, ['2025-W52', 'B1', 'S2', 7]));
    expect(totals.rowsTaken).toBe(1 + 312);
    expect(findings).toMatchObject([{ kind: 'duplicate-row', row: 315, detail: expect.stringContaining('row 4') }]);
  });

  it('keeps codes as they are written and reads numbers of a spreadsheet as codes', async () => {
    const { rows } = await importFrom(
      sales(['2026-W41', '007', 'S1', 1], ['2026-W42', 4711, 12, 1], ['2026-W43', '="0012"', ' S1 ', 1]),
    );
    expect(rows.slice(1).map(({ item, location }) => [item, location])).toEqual([
      ['007', 'S1'],
      ['4711', '12'],
      ['0012', 'S1'],
    ]);
  });

  it('says "All" where a file has no locations', async () => {
    const { rows } = await importFrom(
      makeTable([
        ['week', 'item', 'units'],
        ['2026-W41', 'A1', 1],
      ]),
    );
    expect(rows[0]!.location).toBe('All');
  });

  it('reads decimal commas and percents as the form and the columns say', async () => {
    const table = makeTable(
      [
        ['Week', 'Item', 'Units', 'Net sales', 'Discount %'],
        ['2026-W41', 'A1', '1.234,5', '2.000,25 €', '12,5'],
        ['2026-W42', 'A1', '3', '7,5', '0'],
      ],
      'csv',
    );
    const { rows } = await importFrom(table);
    expect(rows.map(({ units, netValue, depth }) => [units, netValue, depth])).toEqual([
      [1234.5, 2000.25, 0.125],
      [3, 7.5, 0],
    ]);
  });

  it('mends numbers stored as text in a workbook and tells the first hundred', async () => {
    const rows = Array.from({ length: 130 }, (_, row): CellValue[] => ['2026-W41', `A${row}`, '5']);
    const { findings, totals } = await importFrom(makeTable([['week', 'item', 'units'], ...rows], 'xlsx'));
    expect(totals).toMatchObject({ rowsTaken: 130, units: 650, findings: { 'number-from-text': 130 } });
    expect(findings).toHaveLength(101);
    expect(findings[0]).toMatchObject({ cell: 'C2', before: '5', after: '5', verdict: 'repaired' });
    expect(findings.at(-1)).toMatchObject({ kind: 'more-of-these', detail: expect.stringMatching(/^30 more/) });
  });

  it('takes no figure from a merged cell or a formula without a value, but texts from merged cells', async () => {
    const table = makeTable([
      ['week', 'item', 'units'],
      ['2026-W41', 'A1', 1],
      ['2026-W42', 'A1', 1],
      ['2026-W43', 'A1', null],
    ]);
    const batches = async function* () {
      for await (const row of makeTable([]).sheets[0]!.rows()) yield [row];
      const rows = [];
      for await (const row of table.sheets[0]!.rows()) rows.push(row);
      rows[1]!.merged = [1];
      rows[2]!.merged = [1, 2];
      rows[3]!.uncomputed = [2];
      yield rows;
    };
    const { rows, findings } = await importFrom({ ...table, sheets: [{ ...table.sheets[0]!, batches }] });
    expect(rows.map(({ row }) => row)).toEqual([2]);
    expect(findings.map(({ kind, cell }) => [kind, cell])).toEqual([
      ['merged-figure', 'C3'],
      ['formula-without-value', 'C4'],
    ]);
  });

  it('reads planned prices and promotions without units, and refuses rows that plan nothing', async () => {
    const table = makeTable([
      ['week', 'item', 'location', 'price', 'depth', 'promo_coupon', 'promotion'],
      ['2027-W01', 'A1', 'S1', 2.99, 0.25, 1, 'New year'],
      ['2027-W02', 'A1', null, null, null, null, null],
      ['2027-W03', 'A1', null, 3.49, null, null, null],
    ]);
    const { rows, findings, totals } = await importFrom(table);
    expect(rows).toMatchObject([
      { item: 'A1', location: 'S1', price: 2.99, depth: 0.25, mechanics: { coupon: 1 }, promotionName: 'New year' },
      { item: 'A1', location: 'All', price: 3.49, mechanics: {} },
    ]);
    expect(findings).toMatchObject([{ kind: 'nothing-planned', row: 3 }]);
    expect(totals).toMatchObject({ units: null, netValue: null });
  });

  it('adds control totals without the drift of a plain sum', async () => {
    const rows = Array.from({ length: 10_000 }, (_, row): CellValue[] => ['2026-W41', `A${row}`, 0.1]);
    const { totals } = await importFrom(makeTable([['week', 'item', 'units'], ...rows]));
    expect(totals.units).toBeCloseTo(1000, 11);
  });

  it('keeps hostile names out of objects that are looked up by name', async () => {
    const table = makeTable([
      ['week', 'item', 'price', 'promo___proto__'],
      ['2026-W41', '__proto__', 1, 1],
    ]);
    const { rows } = await importFrom(table);
    expect(rows[0]!.item).toBe('__proto__');
    expect(Object.getPrototypeOf(rows[0]!.mechanics)).toBe(Object.prototype);
    expect(({} as Record<string, unknown>).polluted).toBeUndefined();
  });
});

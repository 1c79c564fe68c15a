import { join } from 'node:path';
import { readFileSync } from 'node:fs';
import { afterAll, describe, expect, it, vi } from 'vitest';
import { inspectTable } from '../../../server/workbooks/reading/inspect-table.ts';
import { readImportRows, type ImportRow } from '../../../server/workbooks/reading/import-rows.ts';
import type { TableRow } from '../../../server/workbooks/reading/table.ts';
import { openTable } from '../../../server/workbooks/reading/open-table.ts';
import { listWeeks, weekLabel } from '../../../shared/domain/weeks.ts';
import { makeFolder, openAndRead } from '../../server/workbooks/workbook-files.ts';
import { convertWithLibreOffice, writeWithOpenpyxl } from './spreadsheet-programs.ts';

vi.setConfig({ testTimeout: 180_000 });

/** Sources: files written by LibreOffice Calc and openpyxl, both as Debian packages them. */
describe('files that other programs wrote', () => {
  const folder = makeFolder();
  afterAll(folder.remove);

  const rows: unknown[][] = [
    ['week', 'item', 'location', 'units', 'net_value', 'price', 'feature'],
    ...listWeeks('2026-01-05', 40).map((week, index) => [
      index % 2 === 0 ? { date: week } : weekLabel(week),
      index % 3 === 0 ? `A & <${index}>` : `Ł${index} ß "x", y; z`,
      index % 5 === 0 ? '007' : 'Łódź',
      index === 7 ? -3 : index * 1.25,
      null,
      2.99 + index / 7,
      index % 2 === 0,
    ]),
  ];
  const withoutTail = (cells: unknown[]) => {
    const kept = [...cells];
    while (kept.length > 0 && kept.at(-1) === null) kept.pop();
    return kept;
  };
  const expected = rows.map((cells, index) => ({ sheet: 'Sales', row: index + 1, cells: withoutTail(cells) }));

  /** Both programs write numbers with at most 16 digits. */
  function expectCells(read: TableRow[]): void {
    expect(read.map(({ row }) => row)).toEqual(expected.map(({ row }) => row));
    read.forEach(({ cells }, index) => {
      const wanted = expected[index]!.cells;
      expect(cells).toHaveLength(wanted.length);
      cells.forEach((cell, column) => {
        if (typeof wanted[column] === 'number') expect(cell).toBeCloseTo(wanted[column], 12);
        else expect(cell).toEqual(wanted[column]);
      });
    });
  }

  it('reads what openpyxl wrote, cell by cell', async () => {
    const path = join(folder.path, 'openpyxl.xlsx');
    writeWithOpenpyxl(path, { Sales: rows, Other: [['x']] });
    const read = await openAndRead(path, 'openpyxl.xlsx');
    expectCells(read.Sales!);
    expect(read.Other).toEqual([{ sheet: 'Other', row: 1, cells: ['x'] }]);
  });

  it('reads what LibreOffice wrote, cell by cell', async () => {
    const path = join(folder.path, 'openpyxl.xlsx');
    writeWithOpenpyxl(path, { Sales: rows });
    const read = await openAndRead(convertWithLibreOffice(path, 'xlsx', folder.path), 'libreoffice.xlsx');
    expectCells(read.Sales!);
  });

  it('takes the same rows from LibreOffice’s CSV, UTF-8 or Windows-1252, comma or semicolon and decimal comma', async () => {
    const path = join(folder.path, 'sales.xlsx');
    const plain: unknown[][] = [
      ['week', 'item', 'location', 'units', 'price'],
      ...listWeeks('2026-01-05', 20).map((week, index) => [{ date: week }, `Café ${index}`, 'Köln', index * 1.5, 1.25]),
    ];
    writeWithOpenpyxl(path, { Sales: plain });
    const takeRows = async (file: string, name: string): Promise<Omit<ImportRow, 'sheet'>[]> => {
      const table = await openTable({ path: file, fileName: name });
      const { mapping, form, kind, questions } = await inspectTable(table, { fixedFirstWeekday: null });
      expect(questions).toEqual([]);
      const taken: Omit<ImportRow, 'sheet'>[] = [];
      for await (const batch of readImportRows(table, mapping, { kind: kind!, form, today: '2026-12-01' }).batches()) {
        expect(batch.findings).toEqual([]);
        taken.push(...batch.rows.map(({ sheet: _sheet, ...row }) => row));
      }
      await table.close();
      return taken;
    };
    const fromWorkbook = await takeRows(path, 'sales.xlsx');
    expect(fromWorkbook).toHaveLength(20);
    expect(fromWorkbook[3]).toMatchObject({
      weekStart: '2026-01-26',
      item: 'Café 3',
      location: 'Köln',
      units: 4.5,
      price: 1.25,
    });

    // Field separator, quote, character set (76 UTF-8, 1 Windows-1252), first line, column formats, language (1033 English, 1031 German).
    for (const [format, encoding] of [
      ['44,34,76,1,,1033', 'utf8'],
      ['59,34,1,1,,1031', 'latin1'],
    ] as const) {
      const csv = convertWithLibreOffice(path, `csv:Text - txt - csv (StarCalc):${format}`, folder.path);
      expect(readFileSync(csv, encoding)).toContain('Café 3');
      expect(await takeRows(csv, 'sales.csv')).toEqual(fromWorkbook);
    }
  });
});

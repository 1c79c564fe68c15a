import { afterAll, describe, expect, it, vi } from 'vitest';
import { openTable } from '../../../server/workbooks/reading/open-table.ts';
import { makeFolder, openAndRead } from './workbook-files.ts';

vi.setConfig({ testTimeout: 60_000 });

const folder = makeFolder();
afterAll(folder.remove);

const read = async (content: Buffer | string, fileName = 'sales.csv') =>
  (await openAndRead(folder.write('text', content), fileName))['']!;

const cellsOf = async (content: Buffer | string, fileName?: string) =>
  (await read(content, fileName)).map(({ cells }) => cells);

describe('reading delimited text', () => {
  const expected = [
    ['item', 'name'],
    ['A1', 'Café Łódź'],
  ];

  it.each([
    ['UTF-8', Buffer.from('item,name\nA1,Café Łódź\n')],
    ['UTF-8 with a mark', Buffer.from('\ufeffitem,name\r\nA1,Café Łódź\r\n')],
    ['UTF-16 little-endian with a mark', Buffer.from('\ufeffitem,name\r\nA1,Café Łódź\r\n', 'utf16le')],
    ['UTF-16 big-endian with a mark', Buffer.from('\ufeffitem,name\r\nA1,Café Łódź\r\n', 'utf16le').swap16()],
    ['UTF-16 little-endian without a mark', Buffer.from('item,name\r\nA1,Café Łódź\r\n', 'utf16le')],
  ])('reads %s', async (_encoding, content) => {
    expect(await cellsOf(content)).toEqual(expected);
  });

  it('falls back to Windows-1252 even where the first foreign letter stands late in the file', async () => {
    const rows = Array.from({ length: 40_000 }, (_, row) => `A${row},plain`).join('\n');
    const content = Buffer.concat([Buffer.from(`item,name\n${rows}\nZ,Caf`), Buffer.from([0xe9, 0x20, 0x80, 0x0a])]);
    expect((await cellsOf(content)).at(-1)).toEqual(['Z', 'Café €']);
  });

  it.each([
    ['comma', 'week,item,units\n2026-W01,A,1\n2026-W02,"A,B",2\n', ['2026-W02', 'A,B', '2']],
    [
      'semicolon beside decimal commas',
      'week;item;price\n2026-W01;A;1,5\n2026-W02;B;2,25\n',
      ['2026-W02', 'B', '2,25'],
    ],
    ['tab', 'week\titem\tprice\n2026-W01\tA\t1,5\n2026-W02\tB\t2,25\n', ['2026-W02', 'B', '2,25']],
    ['bar', 'week|item|units\n2026-W01|A|1\n2026-W02|B|2\n', ['2026-W02', 'B', '2']],
    [
      'semicolon below title rows',
      'Sales report\n\nMade on Monday, late\nweek;item;units\n2026-W01;A;1\n2026-W02;B;2\n',
      ['2026-W02', 'B', '2'],
    ],
  ])('finds the delimiter: %s', async (_delimiter, content, last) => {
    expect((await cellsOf(content)).at(-1)).toEqual(last);
  });

  it('obeys a line that names the separator and counts it as a row', async () => {
    expect(await read('sep=|\r\nitem|a,b\r\nA1|1,2\r\n')).toEqual([
      { sheet: '', row: 2, cells: ['item', 'a,b'] },
      { sheet: '', row: 3, cells: ['A1', '1,2'] },
    ]);
  });

  it('counts records as a spreadsheet shows rows: blank ones count, a break inside quotes does not', async () => {
    expect(await read('item,name\n\nA1,"two\nlines"\n,\nA2,x\n')).toEqual([
      { sheet: '', row: 1, cells: ['item', 'name'] },
      { sheet: '', row: 3, cells: ['A1', 'two\nlines'] },
      { sheet: '', row: 5, cells: ['A2', 'x'] },
    ]);
  });

  it('reads a long file whole, quotes and letters cut by its pieces included', async () => {
    const rows = Array.from({ length: 50_000 }, (_, row) => `2026-W01;"Ź${row};é";${row}`);
    const read = await cellsOf(`week;item;units\n${rows.join('\n')}`);
    expect(read).toHaveLength(50_001);
    read.slice(1).forEach((cells, row) => {
      if (cells[1] !== `Ź${row};é` || cells[2] !== String(row))
        throw new Error(`row ${row} reads ${JSON.stringify(cells)}`);
    });
  });

  it('says whether the text was separated by tabs', async () => {
    const table = await openTable({ path: folder.write('tabs', 'a\tb\n1\t2\n'), fileName: 'x.tsv' });
    expect(table.format).toBe('tsv');
  });
});

import ExcelJS from 'exceljs';
import { afterAll, describe, expect, it, vi } from 'vitest';
import { openTable } from '../../../server/workbooks/reading/open-table.ts';
import type { CellValue } from '../../../server/workbooks/reading/table.ts';
import { buildZip, listWorkbookParts, makeFolder, openAndRead, readWholeTable } from './workbook-files.ts';

vi.setConfig({ testTimeout: 60_000 });

const folder = makeFolder();
afterAll(folder.remove);

/** Numbers 0…1 in a fixed order (mulberry32), so that a failing workbook can be made again. */
function makeRandom(seed: number): () => number {
  let state = seed;
  return () => {
    state = (state + 0x6d2b79f5) | 0;
    let mixed = Math.imul(state ^ (state >>> 15), 1 | state);
    mixed = (mixed + Math.imul(mixed ^ (mixed >>> 7), 61 | mixed)) ^ mixed;
    return ((mixed ^ (mixed >>> 14)) >>> 0) / 4294967296;
  };
}

const TEXTS = [
  'Ground coffee 500 g',
  'ß',
  'a & b < c',
  ' leading',
  'two\nlines',
  '"quoted"',
  '日本語',
  'Łódź',
  '😀',
  '=1+1',
  "it's",
  '0042',
  '-',
  '\t',
];

/** Formulas here have results above 0: exceljs doesn't give back a stored result of 0. */
function drawCell(random: () => number): ExcelJS.CellValue {
  const kind = Math.floor(random() * 9);
  if (kind === 0) return null;
  if (kind === 1) return random() < 0.5;
  if (kind === 2)
    return new Date(
      Date.UTC(1999 + Math.floor(random() * 40), Math.floor(random() * 12), 1 + Math.floor(random() * 28)),
    );
  if (kind === 3) return Math.floor(random() * 2000) - 1000;
  if (kind === 4) return (random() - 0.5) * 10 ** Math.floor(random() * 12 - 4);
  if (kind === 5)
    return {
      richText: [{ text: 'bold ', font: { bold: true } }, { text: TEXTS[Math.floor(random() * TEXTS.length)]! }],
    };
  if (kind === 6) return { formula: '1+1', result: 1 + Math.floor(random() * 100) };
  return TEXTS[Math.floor(random() * TEXTS.length)]!;
}

/** What exceljs read, in our terms. */
function translate(value: ExcelJS.CellValue): CellValue {
  if (value === null || value === undefined || value === '') return null;
  if (value instanceof Date) return { date: value.toISOString().slice(0, 10) };
  if (typeof value === 'object') {
    if ('richText' in value) return value.richText.map(({ text }) => text).join('');
    if ('result' in value) return translate(value.result);
    if ('error' in value) return value.error;
    return null;
  }
  return value;
}

describe('reading .xlsx', () => {
  it.each(Array.from({ length: 60 }, (_, index) => index + 1))(
    'agrees with exceljs cell by cell on drawn workbook %i',
    async (seed) => {
      const random = makeRandom(seed);
      const book = new ExcelJS.Workbook();
      book.properties.date1904 = seed % 5 === 0;
      for (let sheetNumber = 1; sheetNumber <= 1 + Math.floor(random() * 3); sheetNumber += 1) {
        const sheet = book.addWorksheet(`Sheet ${sheetNumber} & more`);
        const width = 1 + Math.floor(random() * 30);
        for (let row = 1; row <= 1 + Math.floor(random() * 40); row += 1) {
          if (random() < 0.1) continue;
          for (let column = 1; column <= width; column += 1) {
            if (random() < 0.75) sheet.getCell(row, column).value = drawCell(random);
          }
        }
        if (random() < 0.5) sheet.mergeCells(2, 1, 4, 2);
      }
      const path = folder.write(
        `drawn-${seed}.xlsx`,
        Buffer.from(await book.xlsx.writeBuffer({ useSharedStrings: seed % 2 === 0 })),
      );

      const read = await openAndRead(path, 'drawn.xlsx');

      const peer = new ExcelJS.Workbook();
      await peer.xlsx.readFile(path);
      let compared = 0;
      for (const sheet of peer.worksheets) {
        const own = new Map(read[sheet.name]!.map((row) => [row.row, row.cells]));
        for (let row = 1; row <= Math.max(sheet.rowCount, ...own.keys()); row += 1) {
          const width = Math.max(sheet.columnCount, own.get(row)?.length ?? 0);
          for (let column = 1; column <= width; column += 1) {
            const expected = translate(sheet.findRow(row)?.findCell(column)?.value);
            expect(own.get(row)?.[column - 1] ?? null, `${sheet.name} R${row}C${column}`).toEqual(expected);
            compared += 1;
          }
        }
      }
      expect(compared).toBeGreaterThan(0);
    },
  );

  it('reads inline texts, rich texts without their pronunciation, booleans, errors and ISO dates', async () => {
    const xml = `<sheetData><row r="2">
      <c r="A2" t="inlineStr"><is><t>plain</t></is></c>
      <c r="B2" t="s"><v>0</v></c><c r="C2" t="b"><v>1</v></c><c r="D2" t="e"><v>#N/A</v></c>
      <c r="E2" t="d"><v>2026-11-30T00:00:00</v></c><c t="str"><f>A2</f><v>line_x000A_break</v></c><c r="H2"/></row></sheetData>`;
    const sharedStrings =
      '<si><r><t>ri</t></r><r><t xml:space="preserve">ch </t></r><rPh sb="0" eb="1"><t>not me</t></rPh></si>';
    const path = folder.write('kinds.xlsx', buildZip(listWorkbookParts([{ name: 'S', xml }], { sharedStrings })));

    expect(await openAndRead(path, 'kinds.xlsx')).toEqual({
      S: [{ sheet: 'S', row: 2, cells: ['plain', 'rich ', true, '#N/A', { date: '2026-11-30' }, 'line\nbreak'] }],
    });
  });

  it('takes numbers for dates by their format, in both date systems, and leaves times and durations numbers', async () => {
    const styles = `<numFmts><numFmt numFmtId="170" formatCode="[$-409]dd\\-mmm\\-yy;@"/><numFmt numFmtId="171" formatCode="[h]:mm:ss"/>
      <numFmt numFmtId="172" formatCode="0.00&quot; per day&quot;"/><numFmt numFmtId="173" formatCode="mmm"/></numFmts>
      <cellStyleXfs><xf numFmtId="14"/></cellStyleXfs>
      <cellXfs><xf numFmtId="0"/><xf numFmtId="14"/><xf numFmtId="170"/><xf numFmtId="171"/><xf numFmtId="172"/><xf numFmtId="173"/><xf numFmtId="20"/></cellXfs>`;
    const xml = `<sheetData><row r="1">${[0, 1, 2, 3, 4, 5, 6].map((style) => `<c s="${style}"><v>45992.5</v></c>`).join('')}<c s="1"><v>59</v></c></row></sheetData>`;
    const parts = (workbookProperties: string) =>
      buildZip(listWorkbookParts([{ name: 'S', xml }], { styles, workbookProperties }));
    const from1900 = folder.write('1900.xlsx', parts(''));
    const from1904 = folder.write('1904.xlsx', parts('<workbookPr date1904="1"/>'));

    // 45992 is 1 December 2025 and 59 is 28 February 1900 in the 1900 system; the 1904 system counts 1,462 days later.
    const day = { date: '2025-12-01' };
    expect((await openAndRead(from1900, 'a.xlsx')).S?.[0]?.cells).toEqual([
      45992.5,
      day,
      day,
      45992.5,
      45992.5,
      day,
      45992.5,
      { date: '1900-02-28' },
    ]);
    expect((await openAndRead(from1904, 'a.xlsx')).S?.[0]?.cells[1]).toEqual({ date: '2029-12-02' });
  });

  it('repeats the value of a merged range in its cells and says which cells are such', async () => {
    const xml = `<sheetData><row r="1"><c r="A1" t="inlineStr"><is><t>Beans</t></is></c><c r="B1"><v>1</v></c></row>
      <row r="2"><c r="B2"><v>2</v></c></row><row r="3"><c r="B3"><v>3</v></c></row></sheetData>
      <mergeCells count="1"><mergeCell ref="A1:A2"/></mergeCells>`;
    const path = folder.write('merged.xlsx', buildZip(listWorkbookParts([{ name: 'S', xml }])));

    expect((await openAndRead(path, 'merged.xlsx')).S).toEqual([
      { sheet: 'S', row: 1, cells: ['Beans', 1] },
      { sheet: 'S', row: 2, cells: ['Beans', 2], merged: [0] },
      { sheet: 'S', row: 3, cells: [null, 3] },
    ]);
  });

  it('reads stored values of formulas, never the formula, and says where none is stored', async () => {
    const xml = `<sheetData><row r="1"><c r="A1"><f>SUM(B1:B9)</f><v>12</v></c><c r="B1"><f>WEBSERVICE("x")</f></c></row></sheetData>`;
    const path = folder.write('formulas.xlsx', buildZip(listWorkbookParts([{ name: 'S', xml }])));

    expect((await openAndRead(path, 'f.xlsx')).S).toEqual([{ sheet: 'S', row: 1, cells: [12], uncomputed: [1] }]);
  });

  it('skips hidden sheets and says so', async () => {
    const xml = '<sheetData><row r="1"><c r="A1"><v>1</v></c></row></sheetData>';
    const sheets = [
      { name: 'Shown', xml },
      { name: 'Hidden', xml, state: 'hidden' },
      { name: 'Very', xml, state: 'veryHidden' },
    ];
    const path = folder.write('hidden.xlsx', buildZip(listWorkbookParts(sheets)));
    const table = await openTable({ path, fileName: 'hidden.xlsx' });

    expect(Object.keys(await readWholeTable(table))).toEqual(['Shown']);
    expect(table.skippedSheets).toEqual([
      { name: 'Hidden', reason: 'hidden' },
      { name: 'Very', reason: 'hidden' },
    ]);
    await table.close();
  });

  it('reads the same rows again on a second pass and after a pass that was broken off', async () => {
    const rows = Array.from({ length: 5000 }, (_, row) => `<row r="${row + 1}"><c><v>${row}</v></c></row>`).join('');
    const path = folder.write(
      'twice.xlsx',
      buildZip(listWorkbookParts([{ name: 'S', xml: `<sheetData>${rows}</sheetData>` }])),
    );
    const table = await openTable({ path, fileName: 'twice.xlsx' });
    for await (const row of table.sheets[0]!.rows()) if (row.row === 10) break;

    const first = await readWholeTable(table);
    expect(first.S).toHaveLength(5000);
    expect(await readWholeTable(table)).toEqual(first);
    await table.close();
  });
});

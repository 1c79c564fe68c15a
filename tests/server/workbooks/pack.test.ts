import { createWriteStream } from 'node:fs';
import { join } from 'node:path';
import { Writable } from 'node:stream';
import ExcelJS from 'exceljs';
import { afterAll, describe, expect, it, vi } from 'vitest';
import { checksumContent, type PackContent } from '../../../server/workbooks/pack/pack-content.ts';
import { listPeriods } from '../../../server/workbooks/pack/pack-arithmetic.ts';
import { namePackFile, nameSheets } from '../../../server/workbooks/pack/pack-names.ts';
import { writePack } from '../../../server/workbooks/pack/write-pack.ts';
import { HOSTILE_TEXTS, addUpLines, makePackContent } from './pack-example.ts';
import { makeFolder } from './workbook-files.ts';

vi.setConfig({ testTimeout: 60_000 });

const folder = makeFolder();
afterAll(folder.remove);

let written = 0;

async function writeAndRead(content: PackContent) {
  const path = join(folder.path, `pack-${(written += 1)}.xlsx`);
  const pack = await writePack(content, createWriteStream(path));
  const book = new ExcelJS.Workbook();
  await book.xlsx.readFile(path);
  return { pack, book };
}

function listCells(book: ExcelJS.Workbook): ExcelJS.Cell[] {
  const cells: ExcelJS.Cell[] = [];
  book.eachSheet((sheet) => {
    sheet.eachRow((row) => {
      row.eachCell((cell) => cells.push(cell));
    });
  });
  return cells;
}

/** The row whose first cell has this text. */
function findRow(sheet: ExcelJS.Worksheet, label: string): ExcelJS.Row {
  for (let row = 1; row <= sheet.rowCount; row += 1)
    if (sheet.getCell(row, 1).value === label) return sheet.getRow(row);
  throw new Error(`no row “${label}” on ${sheet.name}`);
}

describe('the finance pack', () => {
  it('holds its sheets in order, and its totals agree with the plan', async () => {
    const content = makePackContent();
    const { pack, book } = await writeAndRead(content);
    const names = ['Cover', 'Summary', 'Ground coffee', 'Coffee beans', 'Instant coffee', 'Overrides', 'Assumptions'];
    expect(book.worksheets.map(({ name }) => name)).toEqual(names);
    expect(pack.sheetNames).toEqual(names);

    const sums = addUpLines(content.lines);
    expect(pack.totals.units).toBe(sums.units);
    expect(pack.totals.netValue).toBeCloseTo(sums.netValue, 6);
    const cover = book.getWorksheet('Cover')!;
    expect(findRow(cover, 'plan, as kept').getCell(3).value).toBe(sums.units);
    expect(findRow(cover, 'sheets, summed').getCell(3).result).toBe(sums.units);
    expect(findRow(cover, 'sheets, summed').getCell(4).result).toBeCloseTo(sums.netValue, 6);
    expect(findRow(cover, 'difference').getCell(4).formula).toMatch(/^ROUND/);
    expect(findRow(book.getWorksheet('Ground coffee')!, 'Plan, units').getCell(4).result).toBe(
      content.lines[0]!.rows.reduce((sum, { plan }) => sum + plan[0]!, 0),
    );
  });

  it('shows a difference where the sheets don’t add up to what was kept', async () => {
    const { book } = await writeAndRead(makePackContent({ controlTotals: { units: 1, netValue: 2 } }));
    const difference = findRow(book.getWorksheet('Cover')!, 'difference');
    expect(difference.getCell(3).result).toBeLessThan(0);
    expect(difference.getCell(4).result).toBeLessThan(0);
  });

  it('names versions, who locked and when, the date of the data, open remarks, the caution and the checksum', async () => {
    const content = makePackContent();
    const { pack, book } = await writeAndRead(content);
    const texts = listCells(book)
      .filter(({ worksheet }) => worksheet.name === 'Cover')
      .map(({ text }) => text);
    for (const expected of [
      'Rowan Achter',
      '25 Nov 2026, 15:20',
      'locked in part',
      '6 of 13',
      '2026-W47, which ended on 22 Nov 2026',
      content.remarks[0],
      `SHA-256 ${pack.checksum}`,
    ]) {
      expect(texts).toContain(expected);
    }
    expect(texts.some((text) => text.startsWith('A forecast is an estimate.'))).toBe(true);
  });

  it('keeps every text a text, whatever it begins with, in every place that takes one', async () => {
    const base = makePackContent({ lineCount: HOSTILE_TEXTS.length });
    const at = (index: number) => HOSTILE_TEXTS[index % HOSTILE_TEXTS.length]!;
    const content: PackContent = {
      ...base,
      category: at(0),
      builtBy: at(4),
      remarks: HOSTILE_TEXTS,
      lines: base.lines.map((line, index) => ({
        ...line,
        name: at(index),
        lockedBy: at(index + 1),
        rows: line.rows.map((row, item) => ({
          ...row,
          item: at(index + item),
          itemName: at(index + item + 3),
          location: at(item),
        })),
      })),
      overrides: HOSTILE_TEXTS.map((text) => ({
        ...base.overrides[0]!,
        author: text,
        reason: text,
        note: text,
        scope: text,
        line: text,
      })),
      assumptions: {
        prices: HOSTILE_TEXTS.map((text) => ({
          ...base.assumptions.prices[0]!,
          line: text,
          item: text,
          location: text,
        })),
        promotions: HOSTILE_TEXTS.map((text) => ({
          ...base.assumptions.promotions[0]!,
          name: text,
          line: text,
          items: text,
          locations: text,
          mechanic: text,
        })),
        holidays: HOSTILE_TEXTS.map((text) => ({ date: '2026-12-25', name: text })),
        fits: HOSTILE_TEXTS.map((text) => ({ ...base.assumptions.fits[1]!, line: text, remark: text })),
        findings: HOSTILE_TEXTS.map((text) => ({ line: text, detail: text })),
      },
    };
    const { book } = await writeAndRead(content);
    const cells = listCells(book);
    const formulas = cells.flatMap(({ formula }) => (formula ? [formula.replace(/'[^']*'!/g, '')] : []));
    expect(formulas.length).toBeGreaterThan(100);
    const safe = /^(SUM|SUMPRODUCT|ROUND|IF)\([A-Z0-9:,=+*/().$-]+$|^[A-Z]+\d+([+*/-][A-Z]*\d+)*$/;
    expect(formulas.filter((formula) => !safe.test(formula))).toEqual([]);
    const texts = new Set(cells.filter(({ type }) => type === ExcelJS.ValueType.String).map(({ value }) => value));
    for (const text of HOSTILE_TEXTS) expect(texts, JSON.stringify(text)).toContain(text.replace('\r', '\n'));
    expect(cells.some(({ hyperlink }) => hyperlink)).toBe(false);
  });

  it('keeps negative numbers numbers', async () => {
    const base = makePackContent();
    base.lines[0]!.rows[0]!.plan[0] = -3;
    const { book } = await writeAndRead(base);
    expect(book.getWorksheet('Ground coffee')!.getCell('D6').value).toBe(-3);
    expect(listCells(book).some(({ worksheet, value }) => worksheet.name === 'Overrides' && value === -120)).toBe(true);
  });

  it('prints on A4 with its titles repeated and stays readable while scrolling', async () => {
    const { book } = await writeAndRead(makePackContent({ weeks: 26 }));
    for (const sheet of book.worksheets)
      expect(sheet.pageSetup).toMatchObject({ paperSize: 9, fitToPage: true, fitToHeight: 0 });
    const line = book.getWorksheet('Ground coffee')!;
    expect(line.pageSetup).toMatchObject({
      orientation: 'landscape',
      fitToWidth: 2,
      printTitlesRow: '4:5',
      printTitlesColumn: 'A:C',
    });
    expect(line.views[0]).toMatchObject({ state: 'frozen', xSplit: 3, ySplit: 5, showGridLines: false });
    expect(line.headerFooter.oddFooter).toContain('page &P of &N');
  });

  it('marks overridden figures and promotions by more than colour', async () => {
    const { book } = await writeAndRead(makePackContent());
    const sheet = book.getWorksheet('Ground coffee')!;
    expect(sheet.getCell('E6').font).toMatchObject({ underline: true, color: { argb: 'FF6B3F69' } });
    expect(sheet.getCell('F7').fill).toMatchObject({ fgColor: { argb: 'FFF6E3B8' } });
    expect(sheet.getCell('D6').font.underline).toBeUndefined();
  });

  it('leaves unknown figures empty and doesn’t compare with a year that isn’t wholly known', async () => {
    const { book } = await writeAndRead(makePackContent());
    const summary = book.getWorksheet('Summary')!;
    const february = summary
      .getRows(1, summary.rowCount)!
      .find((row) => row.getCell(1).value === 'Instant coffee' && row.getCell(2).value === 'February 2027')!;
    expect([february.getCell(6).value, february.getCell(7).value]).toEqual([null, null]);
    expect(findRow(summary, 'Hot drinks').getCell(6).value).toBeNull();
  });

  it('writes a line without items, a pack of one week, and overrides and assumptions that are none', async () => {
    const base = makePackContent({ weeks: 1, lineCount: 1 });
    const content = {
      ...base,
      lines: [{ ...base.lines[0]!, rows: [] }],
      controlTotals: { units: 0, netValue: null },
      overrides: [],
      remarks: [],
      assumptions: { prices: [], promotions: [], holidays: [], fits: [], findings: [] },
    };
    const { pack, book } = await writeAndRead(content);
    expect(pack.totals).toEqual({ units: 0, netValue: 0 });
    expect(listCells(book).map(({ text }) => text)).toContain('None: the plan is the model.');
  });

  it('refuses content that doesn’t run along its weeks', async () => {
    const base = makePackContent();
    base.lines[0]!.rows[0]!.plan.pop();
    await expect(writePack(base, new Writable())).rejects.toThrow(RangeError);
    const notANumber = makePackContent();
    notANumber.lines[0]!.rows[0]!.plan[3] = Number.NaN;
    await expect(writePack(notANumber, new Writable())).rejects.toThrow(/no number/);
  });

  it('fails where its stream fails', async () => {
    const broken = new Writable({
      write: (_chunk, _encoding, done) => {
        done(new Error('disk full'));
      },
    });
    await expect(writePack(makePackContent({ lineCount: 7, itemsPerLine: 60 }), broken)).rejects.toThrow('disk full');
  });

  it('has one checksum for what it says, another as soon as a figure differs', () => {
    const checksum = checksumContent(makePackContent());
    expect(checksumContent(makePackContent({ builtAt: new Date(0), number: 15 }))).toBe(checksum);
    const changed = makePackContent();
    changed.lines[1]!.rows[2]!.plan[4]! += 1;
    expect(checksumContent(changed)).not.toBe(checksum);
  });
});

describe('names in a pack', () => {
  it('makes sheet names valid and unique', () => {
    const long = 'Coffee, tea and other hot drinks for the whole family';
    const names = nameSheets(
      ['Cover', 'Tea: black/green [A]*?', "'Quoted'", '', long, long, 'TEA', 'tea', 'History', '😀'.repeat(20)],
      ['Cover', 'Summary'],
    );
    expect(names).toEqual([
      'Cover 2',
      'Tea black green A',
      '’Quoted’',
      'Line',
      'Coffee, tea and other hot drink',
      'Coffee, tea and other hot dri 2',
      'TEA',
      'tea 2',
      'History 2',
      '😀'.repeat(15),
    ]);
    for (const name of names) expect(name.length).toBeLessThanOrEqual(31);
  });

  it('names the file by category, weeks and number', () => {
    expect(namePackFile({ category: 'Hot drinks & Café', weekStarts: ['2026-11-30', '2027-02-22'], number: 14 })).toBe(
      'fairweek-pack-hot-drinks-cafe-2026W49-2027W08-14.xlsx',
    );
    expect(namePackFile({ category: '../..', weekStarts: ['2026-11-30'], number: 1 })).toBe(
      'fairweek-pack-category-2026W49-1.xlsx',
    );
  });

  it('gives a week to the month of its fourth day', () => {
    // The week from 28 December 2026 has its fourth day on the 31st, the one from 29 December 2025 on 1 January.
    expect(listPeriods(['2026-12-21', '2026-12-28', '2027-01-04'])).toEqual([
      { month: '2026-12', first: 0, last: 1 },
      { month: '2027-01', first: 2, last: 2 },
    ]);
    expect(listPeriods(['2025-12-29'])).toEqual([{ month: '2026-01', first: 0, last: 0 }]);
  });
});

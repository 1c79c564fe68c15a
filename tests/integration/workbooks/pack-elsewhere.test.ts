import { createWriteStream, readFileSync, readdirSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest';
import type { PackContent } from '../../../server/workbooks/pack/pack-content.ts';
import { writePack } from '../../../server/workbooks/pack/write-pack.ts';
import { HOSTILE_TEXTS, addUpLines, makePackContent } from '../../server/workbooks/pack-example.ts';
import { makeFolder } from '../../server/workbooks/workbook-files.ts';
import { convertWithLibreOffice, dropStoredResults, readWithOpenpyxl, type SeenCell } from './spreadsheet-programs.ts';

vi.setConfig({ testTimeout: 180_000 });

/** Sources: LibreOffice Calc and openpyxl, both as Debian packages them. */
describe('the pack in other programs', () => {
  const folder = makeFolder();
  afterAll(folder.remove);

  const content = makePackContent({ lineCount: 7, itemsPerLine: 12 });
  const path = join(folder.path, 'pack.xlsx');
  let own: SeenCell[] = [];

  beforeAll(async () => {
    await writePack(content, createWriteStream(path));
    own = readWithOpenpyxl(path);
  });

  const keyOf = ({ sheet, row, column }: SeenCell) => `${sheet} R${row}C${column}`;

  it('recalculates in LibreOffice to the stored results, from formulas that were stripped of them', () => {
    const bare = join(folder.path, 'bare.xlsx');
    dropStoredResults(path, bare);
    expect(readWithOpenpyxl(bare).filter(({ type, result }) => type === 'f' && result !== null)).toEqual([]);

    const recalculated = new Map(
      readWithOpenpyxl(convertWithLibreOffice(bare, 'xlsx', folder.path)).map((cell) => [keyOf(cell), cell]),
    );
    const formulas = own.filter(({ type }) => type === 'f');
    expect(formulas.length).toBeGreaterThan(500);
    for (const cell of formulas) {
      const other = recalculated.get(keyOf(cell));
      expect(typeof cell.result, keyOf(cell)).toBe('number');
      expect(typeof other?.result, keyOf(cell)).toBe('number');
      const [stored, calculated] = [Number(cell.result), Number(other?.result)];
      expect(Math.abs(stored - calculated), `${keyOf(cell)} ${String(cell.value)}`).toBeLessThanOrEqual(
        1e-12 * Math.max(1, Math.abs(stored)),
      );
    }
  });

  it('holds formulas where totals stand and nowhere else', () => {
    const formulas = own.filter(({ type }) => type === 'f');
    const [lines, weeks, items, months] = [7, 13, 12, 3];
    // Per line: a total for each row and week, their sum, the year before, a net value for each row and week, and their sum.
    const perLine = items + weeks + 1 + 1 + items + weeks + 1;
    const onLines = lines * perLine - formulasMissingBecauseUnknown();
    expect(
      formulas.filter(({ sheet }) => !['Cover', 'Summary', 'Overrides', 'Assumptions'].includes(sheet)),
    ).toHaveLength(onLines);
    expect(formulas.filter(({ sheet }) => sheet === 'Cover')).toHaveLength(4);
    expect(formulas.filter(({ sheet }) => sheet === 'Overrides')).toHaveLength(1);
    expect(formulas.filter(({ sheet }) => sheet === 'Assumptions')).toHaveLength(0);
    // Five figures for each line and month, each line and all; two of them stay empty for the month, line and all whose year before isn't known.
    const unknown = 2 * 3;
    expect(formulas.filter(({ sheet }) => sheet === 'Summary')).toHaveLength(5 * (lines * (months + 1) + 1) - unknown);
  });

  /** One line of the example doesn't know one week of the year before, so its sum stays empty. */
  function formulasMissingBecauseUnknown(): number {
    return content.lines.filter(({ lastYearUnits }) => lastYearUnits.includes(null)).length;
  }

  it('reads in openpyxl with the plan as it was given', () => {
    for (const line of content.lines) {
      const cells = new Map(own.filter(({ sheet }) => sheet === line.name).map((cell) => [keyOf(cell), cell]));
      line.rows.forEach((row, index) => {
        row.plan.forEach((units, week) => {
          expect(cells.get(`${line.name} R${6 + index}C${4 + week}`)).toMatchObject({ type: 'n', value: units });
        });
      });
      expect(cells.get(`${line.name} R5C4`)).toMatchObject({ type: 'd', value: '2026-11-30' });
    }
  });

  it('says the control totals and no difference as CSV out of LibreOffice', () => {
    const everySheet = 'csv:Text - txt - csv (StarCalc):44,34,76,1,,0,false,true,false,false,false,-1';
    convertWithLibreOffice(path, everySheet, folder.path);
    const files = readdirSync(join(folder.path, 'from-libreoffice-csv'));
    expect(files).toHaveLength(2 + 7 + 2);
    const cover = readFileSync(join(folder.path, 'from-libreoffice-csv', 'pack-Cover.csv'), 'utf8');
    const sums = addUpLines(content.lines);
    expect(cover).toContain(`"sheets, summed",,${sums.units},${sums.netValue},`);
    expect(cover).toContain('difference,,0,0,');
    for (const file of files) {
      expect(readFileSync(join(folder.path, 'from-libreoffice-csv', file), 'utf8'), file).not.toMatch(
        /#(REF|NAME|VALUE|DIV|N\/A)|Err:\d/,
      );
    }
  });

  it('keeps hostile texts texts in both programs', async () => {
    const base = makePackContent({ lineCount: HOSTILE_TEXTS.length, weeks: 2, itemsPerLine: 2 });
    const hostile: PackContent = {
      ...base,
      category: HOSTILE_TEXTS[0]!,
      builtBy: HOSTILE_TEXTS[7]!,
      remarks: HOSTILE_TEXTS,
      lines: base.lines.map((line, index) => ({
        ...line,
        name: HOSTILE_TEXTS[index]!,
        rows: line.rows.map((row) => ({ ...row, item: HOSTILE_TEXTS[index]!, itemName: HOSTILE_TEXTS[index]! })),
      })),
      overrides: HOSTILE_TEXTS.map((text) => ({
        ...base.overrides[0]!,
        author: text,
        reason: text,
        note: text,
        scope: text,
      })),
    };
    const hostilePath = join(folder.path, 'hostile.xlsx');
    const { sheetNames } = await writePack(hostile, createWriteStream(hostilePath));
    const before = readWithOpenpyxl(hostilePath);
    const after = readWithOpenpyxl(convertWithLibreOffice(hostilePath, 'xlsx', folder.path));
    expect([...new Set(before.map(({ sheet }) => sheet))]).toEqual(sheetNames);
    // openpyxl takes any text that begins with "=" for a formula when it reads one; LibreOffice tells them apart by the file's own mark.
    const formulasOf = (cells: SeenCell[]) =>
      cells.filter(({ type, value }) => type === 'f' && !HOSTILE_TEXTS.includes(String(value))).map(keyOf);
    expect(formulasOf(after)).toEqual(formulasOf(before));
    const texts = new Set(after.map(({ value }) => value));
    for (const text of HOSTILE_TEXTS) expect(texts, JSON.stringify(text)).toContain(text.replace('\r', '\n'));
    for (const { value, result } of after) if (HOSTILE_TEXTS.includes(String(value))) expect(result).toBe(value);
  });
});

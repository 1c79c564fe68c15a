import { afterAll, describe, expect, it, vi } from 'vitest';
import { openTable } from '../../../server/workbooks/reading/open-table.ts';
import { inspectTable } from '../../../server/workbooks/reading/inspect-table.ts';
import { UnreadableFileError } from '../../../server/workbooks/reading/unreadable-file-error.ts';
import { buildZip, listWorkbookParts, makeFolder, openAndRead, type ZipPart } from './workbook-files.ts';

vi.setConfig({ testTimeout: 60_000 });

const folder = makeFolder();
afterAll(folder.remove);

const ONE_CELL = '<sheetData><row r="1"><c r="A1"><v>1</v></c></row></sheetData>';
let written = 0;

async function refusalOf(content: Buffer | string, fileName: string, limits = {}): Promise<string> {
  const path = folder.write(`hostile-${(written += 1)}`, content);
  try {
    await openAndRead(path, fileName, limits);
  } catch (error) {
    if (!(error instanceof UnreadableFileError)) throw error;
    expect(error.message).toMatch(/[.]$/);
    return error.code;
  }
  return 'taken';
}

function workbookWith(xml: string, more: ZipPart[] = [], extras = {}): Buffer {
  return buildZip([...listWorkbookParts([{ name: 'S', xml }], extras), ...more]);
}

describe('files that are refused', () => {
  it('takes the plain workbook that the others are variations of', async () => {
    expect(await refusalOf(workbookWith(ONE_CELL), 'a.xlsx')).toBe('taken');
  });

  it.each([
    ['nothing', '', 'a.xlsx', 'empty'],
    ['nothing as text', '', 'a.csv', 'empty'],
    ['blanks as text', ' \r\n\r\n', 'a.csv', 'empty'],
    ['text named .xlsx', 'week,item\n', 'a.xlsx', 'wrong-content'],
    ['a packed file named .csv', workbookWith(ONE_CELL), 'a.csv', 'wrong-content'],
    [
      'a packed file that is no workbook',
      buildZip([{ name: 'word/document.xml', content: '<a/>' }]),
      'a.xlsx',
      'wrong-content',
    ],
    [
      'a PDF named .csv',
      Buffer.from('%PDF-1.7\n%\xe2\xe3\xcf\xd3\n1 0 obj\x00\x01\x02', 'latin1'),
      'a.csv',
      'wrong-content',
    ],
    ['an ending behind an ending', workbookWith(ONE_CELL), 'a.xlsx.exe', 'unsupported-format'],
    ['a path as name', workbookWith(ONE_CELL), '../a.xlsx', 'bad-name'],
    ['a NUL in the name', workbookWith(ONE_CELL), 'a.exe\0.xlsx', 'bad-name'],
    ['an older kind', 'x', 'a.xls', 'unsupported-format'],
  ])('refuses %s', async (_what, content, fileName, code) => {
    expect(await refusalOf(content, fileName)).toBe(code);
  });

  it('tells a workbook with a password from one in the old format', async () => {
    const compound = (entry: string) => {
      const file = Buffer.alloc(4096);
      Buffer.from('d0cf11e0a1b11ae1', 'hex').copy(file);
      file.writeUInt16LE(9, 30);
      file.writeUInt32LE(1, 48);
      file.write(entry, 1024, 'utf16le');
      return file;
    };
    expect(await refusalOf(compound('EncryptedPackage'), 'a.xlsx')).toBe('encrypted');
    expect(await refusalOf(compound('Workbook'), 'a.xlsx')).toBe('old-format');
  });

  it('refuses a cut-off workbook and one whose bytes were changed', async () => {
    const whole = workbookWith(ONE_CELL);
    expect(await refusalOf(whole.subarray(0, whole.length - 40), 'a.xlsx')).toBe('damaged');
    const parts = listWorkbookParts([{ name: 'S', xml: ONE_CELL }]);
    const changed = parts.map((part) => (part.name.includes('sheet1') ? { ...part, claimedChecksum: 1 } : part));
    expect(await refusalOf(buildZip(changed), 'a.xlsx')).toBe('damaged');
    expect(await refusalOf(workbookWith('<sheetData><row r="1"><c><v>1</v></row>'), 'a.xlsx')).toBe('damaged');
  });

  it('refuses a part that unpacks to many times its size, by the directory alone or while reading where the directory lies', async () => {
    const bomb = Buffer.alloc(40_000_000, ' ');
    expect(await refusalOf(workbookWith(ONE_CELL, [{ name: 'xl/bomb.xml', content: bomb }]), 'a.xlsx')).toBe(
      'suspicious-content',
    );
    const lying = listWorkbookParts([{ name: 'S', xml: ONE_CELL }]).map((part) =>
      part.name.includes('sheet1') ? { ...part, content: bomb, claimedSize: 1000 } : part,
    );
    expect(await refusalOf(buildZip(lying), 'a.xlsx')).toBe('damaged');
  });

  it('refuses 100,000 parts, two parts of one name, and parts that climb out of their folder', async () => {
    const many = Array.from({ length: 20_000 }, (_, index) => ({ name: `x${index}`, content: '' }));
    expect(await refusalOf(workbookWith(ONE_CELL, many), 'a.xlsx')).toBe('suspicious-content');
    expect(await refusalOf(workbookWith(ONE_CELL, [{ name: 'XL/Workbook.xml', content: '' }]), 'a.xlsx')).toBe(
      'suspicious-content',
    );
    expect(await refusalOf(workbookWith(ONE_CELL, [{ name: '../../etc/passwd', content: '' }]), 'a.xlsx')).toBe(
      'damaged',
    );
  });

  it('refuses document types, so that no entity is ever defined', async () => {
    const prologue = '<!DOCTYPE w [<!ENTITY a "aaaa"><!ENTITY b "&a;&a;">]>';
    expect(await refusalOf(workbookWith(ONE_CELL, [], { prologue }), 'a.xlsx')).toBe('suspicious-content');
    expect(
      await refusalOf(workbookWith('<sheetData><row r="1"><c><v>&other;</v></c></row></sheetData>'), 'a.xlsx'),
    ).toBe('damaged');
  });

  it('refuses deep nesting, endless texts, tags and comments, too many cells and too many columns', async () => {
    expect(await refusalOf(workbookWith(`${'<a>'.repeat(500)}${'</a>'.repeat(500)}`), 'a.xlsx')).toBe(
      'suspicious-content',
    );
    const noise = Array.from({ length: 60_000 }, (_, index) => `x${index}y`).join('');
    const limits = { unbrokenCharacters: 200_000 };
    for (const xml of [`<a>${noise}</a>`, `<a b="${noise}"/>`, `<!-- ${noise} -->`]) {
      expect(await refusalOf(workbookWith(xml), 'a.xlsx', limits)).toBe('suspicious-content');
    }
    const wide = '<sheetData><row r="1"><c r="XFD1"><v>1</v></c></row></sheetData>';
    expect(await refusalOf(workbookWith(wide), 'a.xlsx')).toBe('too-large');
    const rows = Array.from({ length: 20 }, () => '<row><c><v>1</v></c></row>').join('');
    expect(await refusalOf(workbookWith(`<sheetData>${rows}</sheetData>`), 'a.xlsx', { cells: 10 })).toBe('too-large');
    expect(await refusalOf('a,b\n1,2\n3,4\n5,6\n', 'a.csv', { cells: 5 })).toBe('too-large');
  });

  it('refuses a merged range over the whole sheet once it has filled more cells than a file may have', async () => {
    const rows = Array.from(
      { length: 200 },
      (_, row) => `<row r="${row + 1}"><c r="A${row + 1}"><v>1</v></c></row>`,
    ).join('');
    const xml = `<sheetData>${rows}</sheetData><mergeCells><mergeCell ref="A1:XFD1048576"/></mergeCells>`;
    expect(await refusalOf(workbookWith(xml), 'a.xlsx', { cells: 100_000 })).toBe('too-large');
  });

  it('refuses a text whose quotation mark never closes', async () => {
    const rows = Array.from({ length: 30_000 }, (_, row) => `2026-W01,I${row},1`).join('\n');
    expect(
      await refusalOf(`week,item,units\n2026-W01,"Beans,1\n${rows}\n`, 'a.csv', { unbrokenCharacters: 200_000 }),
    ).toBe('damaged');
  });

  it('says whether the file has no cell, no header or nothing below its header', async () => {
    const inspect = async (content: string) => {
      const table = await openTable({ path: folder.write('inspect.csv', content), fileName: 'inspect.csv' });
      return inspectTable(table, { fixedFirstWeekday: null }).then(
        () => 'taken',
        (error: unknown) => (error as UnreadableFileError).code,
      );
    };
    expect(await inspect('week,item,units\n')).toBe('header-only');
    expect(await inspect('1,2,3\n4,5,6\n')).toBe('no-header');
    expect(await inspect(',,\n,,\n')).toBe('empty');
    expect(await inspect('week,item,units\n2026-W01,A1,3\n')).toBe('taken');
  });
});

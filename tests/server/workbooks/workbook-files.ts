import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { crc32, deflateRawSync } from 'node:zlib';
import { openTable } from '../../../server/workbooks/reading/open-table.ts';
import type { CellValue, OpenedTable, ReadingLimits, TableRow } from '../../../server/workbooks/reading/table.ts';

export interface ZipPart {
  name: string;
  content: Buffer | string;
  /** What the directory claims; the truth unless a test lies. */
  claimedSize?: number;
  claimedChecksum?: number;
}

/** A packed file of the given parts, built byte by byte so that tests can lie in it (APPNOTE.TXT 6.3.10, §4.3). */
export function buildZip(parts: ZipPart[]): Buffer {
  const pieces: Buffer[] = [];
  const directory: Buffer[] = [];
  let offset = 0;
  for (const part of parts) {
    const content = Buffer.from(part.content);
    const packed = deflateRawSync(content);
    const name = Buffer.from(part.name);
    const fields = Buffer.alloc(26);
    fields.writeUInt16LE(20, 0);
    fields.writeUInt16LE(0x0800, 2);
    fields.writeUInt16LE(8, 4);
    fields.writeUInt32LE(part.claimedChecksum ?? crc32(content), 10);
    fields.writeUInt32LE(packed.length, 14);
    fields.writeUInt32LE(part.claimedSize ?? content.length, 18);
    fields.writeUInt16LE(name.length, 22);
    const local = Buffer.concat([Buffer.from('PK\x03\x04', 'latin1'), fields, name, packed]);
    const tail = Buffer.alloc(14);
    tail.writeUInt32LE(offset, 10);
    directory.push(Buffer.concat([Buffer.from('PK\x01\x02\x14\x00', 'latin1'), fields, tail, name]));
    pieces.push(local);
    offset += local.length;
  }
  const central = Buffer.concat(directory);
  const end = Buffer.alloc(22);
  end.write('PK\x05\x06', 0, 'latin1');
  end.writeUInt16LE(parts.length, 8);
  end.writeUInt16LE(parts.length, 10);
  end.writeUInt32LE(central.length, 12);
  end.writeUInt32LE(offset, 16);
  return Buffer.concat([...pieces, central, end]);
}

const MAIN = 'http://schemas.openxmlformats.org/spreadsheetml/2006/main';
const RELATIONS = 'http://schemas.openxmlformats.org/officeDocument/2006/relationships';
const PACKAGE = 'http://schemas.openxmlformats.org/package/2006/relationships';

export interface HandmadeSheet {
  name: string;
  /** What stands inside `<worksheet>`. */
  xml: string;
  state?: string;
}

/** Parts of a small workbook whose sheets are given as XML. */
export function listWorkbookParts(
  sheets: HandmadeSheet[],
  extras: { sharedStrings?: string; styles?: string; workbookProperties?: string; prologue?: string } = {},
): ZipPart[] {
  const relation = (id: string, type: string, target: string) =>
    `<Relationship Id="${id}" Type="${RELATIONS}/${type}" Target="${target}"/>`;
  return [
    { name: '[Content_Types].xml', content: '<Types/>' },
    {
      name: '_rels/.rels',
      content: `<Relationships xmlns="${PACKAGE}">${relation('rId1', 'officeDocument', 'xl/workbook.xml')}</Relationships>`,
    },
    {
      name: 'xl/workbook.xml',
      content: `<workbook xmlns="${MAIN}" xmlns:r="${RELATIONS}">${extras.workbookProperties ?? ''}<sheets>${sheets
        .map(
          ({ name, state }, index) =>
            `<sheet name="${name}" sheetId="${index + 1}" r:id="s${index}"${state ? ` state="${state}"` : ''}/>`,
        )
        .join('')}</sheets></workbook>`,
    },
    {
      name: 'xl/_rels/workbook.xml.rels',
      content: `<Relationships xmlns="${PACKAGE}">${sheets
        .map((_sheet, index) => relation(`s${index}`, 'worksheet', `worksheets/sheet${index + 1}.xml`))
        .join(
          '',
        )}${relation('t', 'sharedStrings', 'sharedStrings.xml')}${relation('y', 'styles', 'styles.xml')}</Relationships>`,
    },
    ...sheets.map(({ xml }, index) => ({
      name: `xl/worksheets/sheet${index + 1}.xml`,
      content: `${extras.prologue ?? ''}<worksheet xmlns="${MAIN}">${xml}</worksheet>`,
    })),
    ...(extras.sharedStrings === undefined
      ? []
      : [{ name: 'xl/sharedStrings.xml', content: `<sst xmlns="${MAIN}">${extras.sharedStrings}</sst>` }]),
    ...(extras.styles === undefined
      ? []
      : [{ name: 'xl/styles.xml', content: `<styleSheet xmlns="${MAIN}">${extras.styles}</styleSheet>` }]),
  ];
}

/** Writes files into a folder of their own; `remove` deletes it. */
export function makeFolder() {
  const path = mkdtempSync(join(tmpdir(), 'fairweek-workbooks-'));
  return {
    path,
    write: (name: string, content: Buffer | string) => {
      const file = join(path, name);
      writeFileSync(file, content);
      return file;
    },
    remove: () => {
      rmSync(path, { recursive: true, force: true });
    },
  };
}

/** All rows of every sheet, by sheet. */
export async function readWholeTable(table: OpenedTable): Promise<Record<string, TableRow[]>> {
  const rows: Record<string, TableRow[]> = {};
  for (const sheet of table.sheets) {
    rows[sheet.name] = [];
    for await (const row of sheet.rows()) rows[sheet.name]!.push(row);
  }
  return rows;
}

export async function openAndRead(
  path: string,
  fileName: string,
  limits: Partial<ReadingLimits> = {},
): Promise<Record<string, TableRow[]>> {
  const table = await openTable({ path, fileName }, { limits });
  try {
    return await readWholeTable(table);
  } finally {
    await table.close();
  }
}

/** A table of given rows, as if it had been read from a file. */
export function makeTable(rows: CellValue[][], format: OpenedTable['format'] = 'xlsx', sheet = 'Sales'): OpenedTable {
  const numbered = rows
    .map((cells, index): TableRow => ({ sheet, row: index + 1, cells }))
    .filter((row) => row.cells.some((cell) => cell !== null));
  return {
    format,
    sheets: [
      {
        name: sheet,
        batches: async function* () {
          yield numbered;
        },
        rows: async function* () {
          yield* numbered;
        },
      },
    ],
    skippedSheets: [],
    hasDatesFrom1904: false,
    close: async () => undefined,
  };
}

import { createWriteStream } from 'node:fs';
import { finished } from 'node:stream/promises';
import ExcelJS from 'exceljs';
import { listWeeks } from '../../../shared/domain/weeks.ts';
import { openTable } from '../../workbooks/reading/open-table.ts';
import { writePack } from '../../workbooks/pack/write-pack.ts';
import type { PackContent } from '../../workbooks/pack/pack-content.ts';

/**
 * One piece of work on a workbook in a process of its own, so that its peak of memory is its own too. usage: workbook-process.ts WORK FILE; prints the
 * milliseconds and the MB that the peak rose by as JSON.
 */
const works = {
  'make-shared': (file: string) => makeWorkbook(file, true),
  'make-inline': (file: string) => makeWorkbook(file, false),
  read: readWorkbook,
  'write-pack': writeInventedPack,
  'write-plain': writePlainSheets,
};
export type WorkbookWork = keyof typeof works;

const sheets = 20;
const rowsPerSheet = 2000;
const weeks = 26;

async function makeWorkbook(file: string, useSharedStrings: boolean): Promise<void> {
  const workbook = new ExcelJS.stream.xlsx.WorkbookWriter({ filename: file, useSharedStrings });
  const sheet = workbook.addWorksheet('Sales');
  sheet
    .addRow(['week', 'line', 'item', 'location', 'units', 'price', 'regular_price', 'feature', 'display', 'gap'])
    .commit();
  for (let row = 0; row < 200_000; row += 1) {
    const week = `2024-W${String(1 + (row % 52)).padStart(2, '0')}`;
    const cells = [
      week,
      `Line ${row % 40}`,
      `Item ${row % 997}`,
      `Shop ${row % 53}`,
      row % 311,
      1 + (row % 90) / 10,
      9.99,
      row % 2,
      row % 3,
      0,
    ];
    sheet.addRow(cells).commit();
  }
  await workbook.commit();
}

async function readWorkbook(file: string): Promise<void> {
  const table = await openTable({ path: file, fileName: 'sales.xlsx' });
  let cells = 0;
  for (const sheet of table.sheets) {
    for await (const batch of sheet.batches()) for (const row of batch) cells += row.cells.length;
  }
  await table.close();
  if (cells !== 2_000_010) throw new Error(`${cells} cells were read`);
}

function inventPack(): PackContent {
  const weekStarts = listWeeks('2026-11-30', weeks);
  const alongWeeks = <T>(value: (week: number) => T): T[] => Array.from({ length: weeks }, (_, week) => value(week));
  return {
    category: 'Hot drinks',
    number: 1,
    weekStarts,
    currency: 'EUR',
    isVatIncluded: false,
    builtAt: new Date('2026-11-27T14:02:00Z'),
    builtBy: 'Judith Amsel',
    timeZone: 'Europe/Berlin',
    salesThroughWeek: '2026-11-23',
    controlTotals: { units: 0, netValue: null },
    lines: Array.from({ length: sheets }, (_, line) => ({
      name: `Line ${line + 1}`,
      version: 3,
      state: 'locked',
      lockedBy: 'Tomas Velde',
      lockedAt: new Date('2026-11-27T12:00:00Z'),
      isWeekLocked: alongWeeks(() => true),
      // A line’s sheet holds each of them twice: its units and its price.
      rows: Array.from({ length: rowsPerSheet / 2 }, (_row, row) => ({
        item: `I-${line}-${row}`,
        itemName: `Item ${row} of line ${line}`,
        location: `Shop ${row % 50}`,
        plan: alongWeeks((week) => 20 + ((row * 7 + week * 3) % 90)),
        price: alongWeeks((week) => 1.5 + ((row + week) % 40) / 10),
        isOverridden: alongWeeks((week) => (row + week) % 17 === 0),
        isPromoted: alongWeeks((week) => (row + week) % 8 === 0),
      })),
      modelRange: null,
      lastYearUnits: alongWeeks(() => null),
    })),
    overrides: [],
    assumptions: { prices: [], promotions: [], holidays: [], fits: [], findings: [] },
    remarks: [],
  };
}

async function writeInventedPack(file: string): Promise<void> {
  const content = inventPack();
  const stream = createWriteStream(file);
  await writePack(content, stream);
  await finished(stream);
}

/** As many sheets, rows and columns with number formats by the package's streaming writer as it is. */
async function writePlainSheets(file: string): Promise<void> {
  const workbook = new ExcelJS.stream.xlsx.WorkbookWriter({ filename: file, useStyles: true, useSharedStrings: false });
  for (let number = 1; number <= sheets; number += 1) {
    const sheet = workbook.addWorksheet(`Line ${number}`);
    for (let row = 0; row < rowsPerSheet; row += 1) {
      const written = sheet.addRow([
        `I-${number}-${row}`,
        `Item ${row} of line ${number}`,
        `Shop ${row % 50}`,
        row % 2 === 0 ? 'Units' : 'Price',
        ...Array.from({ length: weeks }, (_, week) => 20 + ((row * 7 + week * 3) % 90)),
      ]);
      for (let column = 5; column <= weeks + 4; column += 1) written.getCell(column).numFmt = '#,##0';
      written.commit();
    }
    sheet.commit();
  }
  await workbook.commit();
}

const [work, file] = process.argv.slice(2) as [WorkbookWork, string];
const before = process.resourceUsage().maxRSS;
const startedAt = performance.now();
await works[work](file);
const milliseconds = performance.now() - startedAt;
console.log(JSON.stringify({ milliseconds, megabytes: (process.resourceUsage().maxRSS - before) / 1024 }));

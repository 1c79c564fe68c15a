import { mkdir, writeFile } from 'node:fs/promises';
import path from 'node:path';
import ExcelJS from 'exceljs';
import { addWeeks } from '../shared/domain/weeks.ts';
import { categories, companyName, firstWeek, historyWeeks } from './company.ts';
import { generateCalendar, generateSales, type CalendarRow, type SalesRow } from './generate-sales.ts';

/** Writes the workbooks of this folder anew: `npx tsx seed-data/write-workbooks.ts`. They hold the week after the loaded history, and what is planned. */
const folder = import.meta.dirname;
const lastWeek = addWeeks(firstWeek, historyWeeks - 1);

const salesColumns: readonly [header: string, width: number, value: (row: SalesRow) => string | number][] = [
  ['Week', 11, (row) => row.week],
  ['Product line', 16, (row) => row.line],
  ['Item no.', 10, (row) => row.item],
  ['Description', 28, (row) => row.itemName],
  ['Store', 12, (row) => row.location],
  ['Units', 8, (row) => row.units],
  ['Net sales', 11, (row) => row.netValue],
  ['Price paid', 10, (row) => row.price],
  ['Regular price', 12, (row) => row.regularPrice],
  ['Feature', 8, (row) => row.feature],
  ['Display', 8, (row) => row.display],
  ['promo_multibuy', 14, (row) => row.multibuy],
  ['Gap', 7, (row) => row.gap],
];

const calendarColumns: readonly [header: string, width: number, value: (row: CalendarRow) => string | number][] = [
  ['week', 11, (row) => row.week],
  ['line', 16, (row) => row.line],
  ['item', 10, (row) => row.item],
  ['location', 12, (row) => row.location],
  ['regular_price', 13, (row) => row.regularPrice],
  ['depth', 8, (row) => row.depth],
  ['feature', 8, (row) => row.feature],
  ['display', 8, (row) => row.display],
  ['promo_multibuy', 14, (row) => row.multibuy],
  ['promotion', 20, (row) => row.promotion],
];

function sheetOf<Row>(
  workbook: ExcelJS.Workbook,
  name: string,
  titles: readonly string[],
  columns: readonly [string, number, (row: Row) => string | number][],
  rows: readonly Row[],
): ExcelJS.Worksheet {
  const sheet = workbook.addWorksheet(name);
  sheet.columns = columns.map(([, width]) => ({ width }));
  for (const title of titles) sheet.addRow(title === '' ? [] : [title]);
  sheet.addRow(columns.map(([header]) => header)).font = { bold: true };
  for (const row of rows) sheet.addRow(columns.map(([, , value]) => value(row)));
  return sheet;
}

async function writeWeeklySales(): Promise<void> {
  for (const category of categories) {
    const rows = generateSales(category).filter(({ weekStart }) => weekStart === lastWeek);
    const week = rows[0]?.week ?? '';
    if (category.slug === 'pantry') {
      // As another till system sends it: semicolons and decimal commas.
      const lines = [salesColumns.map(([header]) => header).join(';')];
      for (const row of rows)
        lines.push(salesColumns.map(([, , value]) => String(value(row)).replace('.', ',')).join(';'));
      await writeFile(path.join(folder, `${category.slug}-sales-${week}.csv`), `${lines.join('\r\n')}\r\n`);
      continue;
    }
    const workbook = new ExcelJS.Workbook();
    sheetOf(workbook, 'Sales', [`${companyName}: ${category.name}, weekly sales ${week}`, ''], salesColumns, rows);
    await workbook.xlsx.writeFile(path.join(folder, `${category.slug}-sales-${week}.xlsx`));
  }
}

/** The same week once more as it comes on a bad day: an unknown week, words for numbers, a share above 1, a row twice. */
async function writeSalesWithFaults(): Promise<void> {
  const category = categories[0];
  if (!category) return;
  const rows = generateSales(category).filter(({ weekStart }) => weekStart === lastWeek);
  const workbook = new ExcelJS.Workbook();
  const titles = [`${companyName}: ${category.name}, corrected`, ''];
  const sheet = sheetOf(workbook, 'Sales', titles, salesColumns, rows);
  const firstRow = titles.length + 2;
  sheet.getCell(firstRow + 1, 1).value = 'last week';
  sheet.getCell(firstRow + 3, 6).value = 'n/a';
  sheet.getCell(firstRow + 5, 3).value = null;
  sheet.getCell(firstRow + 7, 10).value = 3;
  sheet.getCell(firstRow + 9, 6).value = ' 1,204 ';
  sheet.addRow(sheet.getRow(firstRow + 12).values);
  await workbook.xlsx.writeFile(path.join(folder, `${category.slug}-sales-with-faults.xlsx`));
}

async function writeCalendars(): Promise<void> {
  for (const category of categories) {
    const workbook = new ExcelJS.Workbook();
    sheetOf(workbook, 'Calendar', [], calendarColumns, generateCalendar(category, historyWeeks));
    await workbook.xlsx.writeFile(path.join(folder, `${category.slug}-calendar-from-2026-W49.xlsx`));
  }
}

await mkdir(folder, { recursive: true });
await writeWeeklySales();
await writeSalesWithFaults();
await writeCalendars();

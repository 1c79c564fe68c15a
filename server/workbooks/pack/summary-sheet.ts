import { nameCell, placeLine } from './line-sheet.ts';
import { addUp, listPeriods, type LineFigures } from './pack-arithmetic.ts';
import type { PackContent, PackLine } from './pack-content.ts';
import { formatMonth } from './pack-dates.ts';
import { nameRange, quoteSheet, type PackCell, type PackSheet, type SheetLayout } from './pack-sheet.ts';
import { FORMATS, formatUnits, STYLES, styleFigure, type FigureTone } from './pack-style.ts';

export function layOutSummary(footer: string): SheetLayout {
  return {
    widths: [28, 18, 8, 14, 16, 14, 11, 10],
    frozenColumns: 1,
    frozenRows: 4,
    titleRow: 4,
    orientation: 'portrait',
    footer,
  };
}

/** Line × calendar month, with sums by line and in all; every figure is a formula on the lines' sheets. */
export function writeSummary(
  sheet: PackSheet,
  content: PackContent,
  made: { lineSheets: string[]; figures: LineFigures[] },
): void {
  const periods = listPeriods(content.weekStarts);
  const unitsFormat = formatUnits(content.lines);
  sheet.write([{ value: 'Summary', style: STYLES.title }], 30);
  sheet.write([{ value: 'A week counts to the month in which its fourth day lies.', style: STYLES.soft }]);
  sheet.skip();
  sheet.write(
    [
      { value: 'Line', style: STYLES.column },
      { value: 'Period', style: STYLES.column },
      ...['Weeks', 'Units', `Net value, ${content.currency}`, 'Year before, units', 'Change', 'Locked'].map(
        (value): PackCell => ({ value, style: STYLES.columnRight }),
      ),
    ],
    30,
  );
  const sums: SummaryFigures[] = [];
  content.lines.forEach((line, index) => {
    const figures = made.figures[index];
    if (!figures) return;
    const firstRow = sheet.lastRow + 1;
    for (const { month, first, last } of periods) {
      const row = sheet.lastRow + 1;
      const own = reckonPeriod(line, figures, first, last);
      const formulas = pointIntoLine(line, made.lineSheets[index] ?? '', content.weekStarts.length, first, last);
      sheet.write(toCells(unitsFormat, [line.name, formatMonth(month)], own, formulas, row, 'plain'));
    }
    const sum = reckonPeriod(line, figures, 0, content.weekStarts.length - 1);
    sums.push({ ...sum, row: sheet.lastRow + 1 });
    const down = (column: number) => `SUM(${nameRange(column, firstRow, column, sheet.lastRow)})`;
    const places = pointIntoLine(
      line,
      made.lineSheets[index] ?? '',
      content.weekStarts.length,
      0,
      content.weekStarts.length - 1,
    );
    sheet.write(
      toCells(
        unitsFormat,
        [line.name, 'All weeks'],
        sum,
        { units: down(3), netValue: down(4), lastYear: down(5), locked: places.locked },
        sheet.lastRow + 1,
        'total',
      ),
    );
  });

  const all: SummaryFigures = {
    row: sheet.lastRow + 1,
    weeks: content.weekStarts.length,
    units: addUp(sums.map(({ units }) => units)),
    netValue: addUp(sums.map(({ netValue }) => netValue)),
    lastYear: sums.some(({ lastYear }) => lastYear === null) ? null : addUp(sums.map(({ lastYear }) => lastYear)),
    lockedUnits: addUp(sums.map(({ lockedUnits }) => lockedUnits)),
  };
  const across = (column: number) => sums.map(({ row }) => nameCell(column, row)).join('+');
  const locked = sums.map(({ row }) => `${nameCell(3, row)}*${nameCell(7, row)}`).join('+');
  sheet.write(
    toCells(
      unitsFormat,
      [content.category, 'All weeks'],
      all,
      { units: across(3), netValue: across(4), lastYear: across(5), locked },
      all.row,
      'grand total',
    ),
  );
  sheet.finish();
}

interface SummaryFigures {
  row: number;
  weeks: number;
  units: number;
  netValue: number;
  lastYear: number | null;
  lockedUnits: number;
}

interface SummaryFormulas {
  units: string;
  netValue: string;
  lastYear: string;
  /** Units in locked weeks. */
  locked: string;
}

function reckonPeriod(line: PackLine, figures: LineFigures, first: number, last: number): SummaryFigures {
  const lastYear = line.lastYearUnits.slice(first, last + 1);
  return {
    row: 0,
    weeks: last - first + 1,
    units: addUp(figures.units, first, last),
    netValue: addUp(figures.netValue, first, last),
    lastYear: lastYear.every((units) => units !== null) ? addUp(lastYear) : null,
    lockedUnits: addUp(
      figures.units.map((units, week) => (line.isWeekLocked[week] ? units : 0)),
      first,
      last,
    ),
  };
}

function pointIntoLine(line: PackLine, sheetName: string, weeks: number, first: number, last: number): SummaryFormulas {
  const places = placeLine(line, weeks);
  const span = (row: number) =>
    `${quoteSheet(sheetName)}!${nameRange(places.firstWeekColumn + first, row, places.firstWeekColumn + last, row)}`;
  return {
    units: `SUM(${span(places.unitsRow)})`,
    netValue: `SUM(${span(places.netValueRow)})`,
    lastYear: `SUM(${span(places.lastYearRow)})`,
    locked: `SUMPRODUCT(${span(places.unitsRow)},${span(places.lockedRow)})`,
  };
}

function toCells(
  unitsFormat: string,
  labels: [string, string],
  figures: SummaryFigures,
  formulas: SummaryFormulas,
  row: number,
  tone: FigureTone,
): PackCell[] {
  const labelStyle = tone === 'plain' ? STYLES.text : tone === 'total' ? STYLES.strong : STYLES.strongDouble;
  const units = nameCell(3, row);
  const lastYear = nameCell(5, row);
  const hasChange = figures.lastYear !== null && figures.lastYear !== 0;
  return [
    ...labels.map((value): PackCell => ({ value, style: labelStyle })),
    { value: figures.weeks, style: styleFigure('0', tone) },
    { value: { formula: formulas.units, result: figures.units }, style: styleFigure(unitsFormat, tone) },
    { value: { formula: formulas.netValue, result: figures.netValue }, style: styleFigure(FORMATS.money, tone) },
    {
      value: figures.lastYear === null ? null : { formula: formulas.lastYear, result: figures.lastYear },
      style: styleFigure(unitsFormat, tone),
    },
    {
      value: hasChange
        ? { formula: `${units}/${lastYear}-1`, result: figures.units / (figures.lastYear ?? 1) - 1 }
        : null,
      style: styleFigure(FORMATS.signedPercent, tone),
    },
    {
      value: {
        formula: `IF(${units}=0,0,(${formulas.locked})/${units})`,
        result: figures.units === 0 ? 0 : figures.lockedUnits / figures.units,
      },
      style: styleFigure(FORMATS.wholePercent, tone),
    },
  ];
}

import { weekLabel } from '../../../shared/domain/weeks.ts';
import { nameCell, placeLine } from './line-sheet.ts';
import { addUp, type LineFigures } from './pack-arithmetic.ts';
import type { PackContent, PackLine } from './pack-content.ts';
import { formatDate, formatInstant, formatWeeks, lastDayOf } from './pack-dates.ts';
import { namePackFile } from './pack-names.ts';
import { quoteSheet, type PackCell, type PackSheet, type SheetLayout } from './pack-sheet.ts';
import { FORMATS, formatUnits, STYLES, styleFigure } from './pack-style.ts';

const LAST_COLUMN = 7;

export function layOutCover(footer: string): SheetLayout {
  return { widths: [30, 10, 17, 16, 20, 20, 14], frozenColumns: 0, frozenRows: 0, orientation: 'portrait', footer };
}

export function writeCover(
  sheet: PackSheet,
  content: PackContent,
  made: { lineSheets: string[]; figures: LineFigures[]; checksum: string },
): void {
  const [firstWeek, lastWeek] = [content.weekStarts[0] ?? '', content.weekStarts.at(-1) ?? ''];
  sheet.write([{ value: `${content.category}, demand plan`, style: STYLES.title }], 32);
  sheet.write([{ value: namePackFile(content), style: STYLES.soft }]);
  sheet.skip();

  const count = content.weekStarts.length;
  const scope: [string, string][] = [
    ['Pack number', String(content.number)],
    [
      'Weeks',
      `${formatWeeks(firstWeek, lastWeek)}, ${count} ${count === 1 ? 'week' : 'weeks'}, ${formatDate(firstWeek)} to ${formatDate(lastDayOf(lastWeek))}`,
    ],
    ['Built', `${formatInstant(content.builtAt, content.timeZone)} (${content.timeZone}) by ${content.builtBy}`],
    [
      'Sales known to',
      content.salesThroughWeek === null
        ? 'no sales yet'
        : `${weekLabel(content.salesThroughWeek)}, which ended on ${formatDate(lastDayOf(content.salesThroughWeek))}`,
    ],
    [
      'Money',
      `${content.currency}, ${content.isVatIncluded === null ? 'VAT basis not stated' : content.isVatIncluded ? 'VAT included' : 'without VAT'}`,
    ],
  ];
  for (const [label, value] of scope) writeLabelled(sheet, label, value, STYLES.text);
  sheet.skip();
  writeControlTotals(sheet, content, made);
  sheet.skip();
  writeLines(sheet, content, made.figures);
  sheet.skip();
  sheet.write([{ value: 'Open remarks', style: STYLES.heading }], 20);
  for (const remark of content.remarks.length > 0 ? content.remarks : ['None.'])
    writeParagraph(sheet, remark, STYLES.textWrapped);
  sheet.skip();
  sheet.write([{ value: 'Caution', style: STYLES.heading }], 20);
  writeParagraph(sheet, describeCaution(content), STYLES.caution);
  sheet.skip();
  writeLabelled(sheet, 'Checksum of contents', `SHA-256 ${made.checksum}`, STYLES.checksum);
  sheet.finish();
}

function writeControlTotals(
  sheet: PackSheet,
  content: PackContent,
  made: { lineSheets: string[]; figures: LineFigures[] },
): void {
  const weeks = content.weekStarts.length;
  const hasValue = content.controlTotals.netValue !== null;
  const units = made.figures.reduce((sum, figures) => sum + addUp(figures.units), 0);
  const netValue = made.figures.reduce((sum, figures) => sum + addUp(figures.netValue), 0);
  const addSheets = (row: 'unitsRow' | 'netValueRow') =>
    content.lines
      .map((line, index) => {
        const places = placeLine(line, weeks);
        return `${quoteSheet(made.lineSheets[index] ?? '')}!${nameCell(places.totalColumn, places[row])}`;
      })
      .join('+');
  const figure = (value: PackCell['value'], format: string, tone: 'plain' | 'grand total' = 'plain'): PackCell => ({
    value,
    style: styleFigure(format, tone),
  });
  const blank = (style: PackCell['style']): PackCell => ({ value: null, style });
  sheet.write(
    [
      { value: 'Control totals', style: STYLES.column },
      blank(STYLES.column),
      { value: 'units', style: STYLES.columnRight },
      { value: `net value, ${content.currency}`, style: STYLES.columnRight },
    ],
    18,
  );
  const stored = sheet.write([
    { value: 'plan, as kept', style: STYLES.label },
    blank(STYLES.label),
    figure(content.controlTotals.units, formatUnits(content.lines)),
    figure(content.controlTotals.netValue, FORMATS.money),
  ]);
  const summed = sheet.write([
    { value: 'sheets, summed', style: STYLES.label },
    blank(STYLES.label),
    figure({ formula: addSheets('unitsRow'), result: units }, formatUnits(content.lines)),
    figure(hasValue ? { formula: addSheets('netValueRow'), result: netValue } : null, FORMATS.money),
  ]);
  sheet.write([
    { value: 'difference', style: STYLES.strongDouble },
    blank(STYLES.strongDouble),
    figure(
      { formula: `ROUND(C${stored}-C${summed},3)`, result: round(content.controlTotals.units - units, 3) },
      formatUnits(content.lines),
      'grand total',
    ),
    figure(
      content.controlTotals.netValue === null
        ? null
        : { formula: `ROUND(D${stored}-D${summed},2)`, result: round(content.controlTotals.netValue - netValue, 2) },
      FORMATS.money,
      'grand total',
    ),
  ]);
}

function writeLines(sheet: PackSheet, content: PackContent, figures: LineFigures[]): void {
  sheet.write(
    [
      { value: 'Line', style: STYLES.column },
      { value: 'version', style: STYLES.columnRight },
      { value: 'state', style: STYLES.columnAfterFigure },
      { value: 'weeks locked', style: STYLES.columnRight },
      { value: 'locked by', style: STYLES.columnAfterFigure },
      { value: 'when', style: STYLES.column },
      { value: 'units', style: STYLES.columnRight },
    ],
    18,
  );
  content.lines.forEach((line, index) => {
    const locked = line.isWeekLocked.filter(Boolean).length;
    const isWhole = locked === line.isWeekLocked.length;
    sheet.write([
      { value: line.name, style: STYLES.text },
      { value: line.version, style: styleFigure('0') },
      { value: describeState(line.state, locked, isWhole), style: isWhole ? STYLES.textAfterFigure : STYLES.conflict },
      { value: `${locked} of ${line.isWeekLocked.length}`, style: styleFigure('@') },
      { value: line.lockedBy ?? '–', style: STYLES.textAfterFigure },
      { value: line.lockedAt === null ? '–' : formatInstant(line.lockedAt, content.timeZone), style: STYLES.text },
      { value: addUp(figures[index]?.units ?? []), style: styleFigure(formatUnits(content.lines)) },
    ]);
  });
}

function describeState(state: PackLine['state'], lockedWeeks: number, isWhole: boolean): string {
  return lockedWeeks > 0 && !isWhole ? 'locked in part' : state;
}

/** The caution that goes with every model figure, in the words of this pack. */
function describeCaution(content: PackContent): string {
  const known =
    content.salesThroughWeek === null
      ? 'No sales were known when it was made.'
      : `Sales were known up to week ${weekLabel(content.salesThroughWeek)} (${formatDate(lastDayOf(content.salesThroughWeek))}) when it was made.`;
  return (
    `A forecast is an estimate. ${known} The range of the model stands on each line’s sheet; where the model reaches outside the prices or promotions ` +
    'seen so far, the Assumptions sheet says so. Ordering of perishable or safety-critical goods needs the responsible person’s judgement.'
  );
}

function writeLabelled(sheet: PackSheet, label: string, value: string, style: PackCell['style']): void {
  const blanks = Array.from({ length: LAST_COLUMN - 2 }, (): PackCell => ({ value: null, style }));
  sheet.write([{ value: label, style: STYLES.label }, { value, style }, ...blanks]);
}

/** A text across the page; its height is reckoned, because spreadsheet programs don't fit rows of merged cells. */
function writeParagraph(sheet: PackSheet, text: string, style: PackCell['style']): void {
  const charactersPerLine = 120;
  sheet.writeAcross(
    { value: text, style },
    LAST_COLUMN,
    15 * Math.max(1, Math.ceil(text.length / charactersPerLine)) + 3,
  );
}

function round(value: number, digits: number): number {
  const rounded = Math.round(value * 10 ** digits) / 10 ** digits;
  return rounded === 0 ? 0 : rounded;
}

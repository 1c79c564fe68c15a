import { weekLabel } from '../../../shared/domain/weeks.ts';
import { nameColumn } from '../reading/table.ts';
import { addUp, type LineFigures } from './pack-arithmetic.ts';
import type { PackContent, PackLine } from './pack-content.ts';
import { formatInstant, toCellDate } from './pack-dates.ts';
import { nameRange, type PackCell, type PackSheet, type SheetLayout } from './pack-sheet.ts';
import { FORMATS, formatUnits, STYLES, styleFigure, type FigureTone } from './pack-style.ts';

/** Rows (1-based) and columns (0-based) where the parts of a line's sheet stand; other sheets' formulas point there. */
export interface LinePlaces {
  firstWeekColumn: number;
  totalColumn: number;
  firstPlanRow: number;
  unitsRow: number;
  lockedRow: number;
  lastYearRow: number;
  firstModelRow: number;
  firstPriceRow: number;
  netValueRow: number;
}

const HEADER_ROWS = 5;
const FIRST_WEEK_COLUMN = 3;
const WEEKS_PER_PAGE = 17;

/** The model's rows below the plan, in the order in which they are written. */
const MODEL_ROWS = [
  { key: 'mean', label: 'Model, expected' },
  { key: 'p10', label: 'Model, 80 % from' },
  { key: 'p90', label: 'Model, 80 % to' },
  { key: 'p2_5', label: 'Model, 95 % from' },
  { key: 'p97_5', label: 'Model, 95 % to' },
] as const;

export function placeLine(line: PackLine, weeks: number): LinePlaces {
  const firstPlanRow = HEADER_ROWS + 1;
  const unitsRow = firstPlanRow + line.rows.length;
  const firstModelRow = unitsRow + 3;
  const firstPriceRow = firstModelRow + (line.modelRange ? MODEL_ROWS.length : 1) + 2;
  return {
    firstWeekColumn: FIRST_WEEK_COLUMN,
    totalColumn: FIRST_WEEK_COLUMN + weeks,
    firstPlanRow,
    unitsRow,
    lockedRow: unitsRow + 1,
    lastYearRow: unitsRow + 2,
    firstModelRow,
    firstPriceRow,
    netValueRow: firstPriceRow + line.rows.length,
  };
}

export function layOutLineSheet(weeks: number, footer: string): SheetLayout {
  return {
    widths: [14, 28, 12, ...new Array<number>(weeks).fill(9.5), 12],
    frozenColumns: FIRST_WEEK_COLUMN,
    frozenRows: HEADER_ROWS,
    titleRow: 4,
    orientation: 'landscape',
    pagesWide: Math.ceil(weeks / WEEKS_PER_PAGE),
    footer,
  };
}

export function writeLineSheet(sheet: PackSheet, content: PackContent, line: PackLine, figures: LineFigures): void {
  const weeks = content.weekStarts.length;
  const places = placeLine(line, weeks);
  const unitsFormat = formatUnits([line]);
  const lastWeekColumn = places.totalColumn - 1;

  sheet.write([{ value: line.name, style: STYLES.title }], 30);
  sheet.write([{ value: describeVersion(line, content.timeZone), style: STYLES.soft }]);
  sheet.write([
    {
      value: 'Plan in units. Underlined in plum: overridden by a person. On turmeric paper: promotion.',
      style: STYLES.soft,
    },
  ]);
  sheet.write(
    [
      ...['Item', 'Name', 'Location'].map((value): PackCell => ({ value, style: STYLES.columnBare })),
      ...content.weekStarts.map((week): PackCell => ({ value: weekLabel(week), style: STYLES.columnBareRight })),
      { value: 'Total', style: STYLES.columnBareRight },
    ],
    18,
  );
  sheet.write([
    { value: null, style: STYLES.column },
    { value: null, style: STYLES.column },
    { value: 'first day', style: STYLES.column },
    ...content.weekStarts.map((week): PackCell => ({
      value: toCellDate(week),
      style: { ...STYLES.columnRight, numFmt: FORMATS.shortDate },
    })),
    { value: null, style: STYLES.columnRight },
  ]);

  line.rows.forEach((row, index) => {
    const number = places.firstPlanRow + index;
    sheet.write([
      ...nameRow(row),
      ...row.plan.map((units, week): PackCell => ({
        value: units,
        style: styleFigure(unitsFormat, markFigure(row.isOverridden[week] ?? false, row.isPromoted[week] ?? false)),
      })),
      {
        value: {
          formula: `SUM(${nameRange(FIRST_WEEK_COLUMN, number, lastWeekColumn, number)})`,
          result: figures.rowUnits[index] ?? 0,
        },
        style: styleFigure(unitsFormat),
      },
    ]);
  });

  const sumDown = (column: number) => nameRange(column, places.firstPlanRow, column, places.unitsRow - 1);
  sheet.write([
    ...labelRow('Plan, units', STYLES.strong),
    ...figures.units.map((units, week): PackCell => ({
      value: line.rows.length === 0 ? 0 : { formula: `SUM(${sumDown(FIRST_WEEK_COLUMN + week)})`, result: units },
      style: styleFigure(unitsFormat, 'total'),
    })),
    {
      value: {
        formula: `SUM(${nameRange(FIRST_WEEK_COLUMN, places.unitsRow, lastWeekColumn, places.unitsRow)})`,
        result: addUp(figures.units),
      },
      style: styleFigure(unitsFormat, 'total'),
    },
  ]);
  sheet.write([
    ...labelRow('Locked (1 = yes)'),
    ...line.isWeekLocked.map((isLocked): PackCell => ({ value: isLocked ? 1 : 0, style: styleFigure('0', 'soft') })),
    { value: null, style: styleFigure('0', 'soft') },
  ]);
  sheet.write([
    ...labelRow('Sold a year before'),
    ...line.lastYearUnits.map((units): PackCell => ({ value: units, style: styleFigure(unitsFormat, 'soft') })),
    sumAcross(places.lastYearRow, places, line.lastYearUnits, unitsFormat, 'soft'),
  ]);
  writeModelRange(sheet, line, weeks);

  sheet.skip();
  sheet.write(
    [
      { value: `Expected price per unit, ${content.currency}`, style: STYLES.heading },
      ...Array.from({ length: places.totalColumn - 1 }, () => null),
      { value: 'Net value', style: STYLES.columnBareRight },
    ],
    20,
  );
  line.rows.forEach((row, index) => {
    const planRow = places.firstPlanRow + index;
    const priceRow = places.firstPriceRow + index;
    const acrossOf = (number: number) => nameRange(FIRST_WEEK_COLUMN, number, lastWeekColumn, number);
    sheet.write([
      ...nameRow(row),
      ...row.price.map((price): PackCell => ({ value: price, style: styleFigure(FORMATS.money) })),
      {
        value: {
          formula: `SUMPRODUCT(${acrossOf(planRow)},${acrossOf(priceRow)})`,
          result: figures.rowNetValue[index] ?? 0,
        },
        style: styleFigure(FORMATS.money),
      },
    ]);
  });
  const valueDown = (column: number) => nameRange(column, places.firstPriceRow, column, places.netValueRow - 1);
  sheet.write([
    ...labelRow(`Net value, ${content.currency}`, STYLES.strong),
    ...figures.netValue.map((value, week): PackCell => {
      const column = FIRST_WEEK_COLUMN + week;
      return {
        value:
          line.rows.length === 0
            ? 0
            : { formula: `SUMPRODUCT(${sumDown(column)},${valueDown(column)})`, result: value },
        style: styleFigure(FORMATS.money, 'total'),
      };
    }),
    {
      value: {
        formula: `SUM(${nameRange(FIRST_WEEK_COLUMN, places.netValueRow, lastWeekColumn, places.netValueRow)})`,
        result: addUp(figures.netValue),
      },
      style: styleFigure(FORMATS.money, 'total'),
    },
  ]);
  sheet.finish();
}

function writeModelRange(sheet: PackSheet, line: PackLine, weeks: number): void {
  const range = line.modelRange;
  if (!range) {
    sheet.write([{ value: 'The line has no fitted model, so no range.', style: STYLES.soft }]);
    return;
  }
  for (const { key, label } of MODEL_ROWS) {
    sheet.write([
      ...labelRow(label),
      ...range[key]
        .slice(0, weeks)
        .map((units): PackCell => ({ value: units, style: styleFigure(FORMATS.wholeUnits, 'model') })),
      { value: null, style: styleFigure(FORMATS.wholeUnits, 'model') },
    ]);
  }
}

function sumAcross(
  row: number,
  places: LinePlaces,
  values: readonly (number | null)[],
  format: string,
  tone: FigureTone,
): PackCell {
  const isKnown = values.every((value) => value !== null);
  return {
    value: isKnown
      ? {
          formula: `SUM(${nameRange(places.firstWeekColumn, row, places.totalColumn - 1, row)})`,
          result: addUp(values),
        }
      : null,
    style: styleFigure(format, tone),
  };
}

function nameRow(row: PackLine['rows'][number]): PackCell[] {
  return [row.item, row.itemName, row.location ?? 'All'].map((value) => ({ value, style: STYLES.text }));
}

function labelRow(label: string, style: PackCell['style'] = STYLES.label): PackCell[] {
  return [
    { value: label, style },
    { value: null, style },
    { value: null, style },
  ];
}

function markFigure(isOverridden: boolean, isPromoted: boolean): FigureTone {
  if (isOverridden) return isPromoted ? 'overridden promoted' : 'overridden';
  return isPromoted ? 'promoted' : 'plain';
}

export function describeVersion(line: PackLine, timeZone: string): string {
  const lockedCount = line.isWeekLocked.filter(Boolean).length;
  if (lockedCount === 0) return `Version ${line.version}, ${line.state}, not locked`;
  const weeks =
    lockedCount === line.isWeekLocked.length ? 'all weeks' : `${lockedCount} of ${line.isWeekLocked.length} weeks`;
  const by = line.lockedBy === null ? '' : ` by ${line.lockedBy}`;
  const at = line.lockedAt === null ? '' : ` on ${formatInstant(line.lockedAt, timeZone)}`;
  return `Version ${line.version}, ${weeks} locked${by}${at}`;
}

/** `D20`, columns 0-based. */
export function nameCell(column: number, row: number): string {
  return `${nameColumn(column)}${row}`;
}

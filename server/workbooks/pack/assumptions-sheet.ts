import type { PackContent } from './pack-content.ts';
import { formatInstant, formatWeeks, toCellDate } from './pack-dates.ts';
import type { PackCell, PackSheet, SheetLayout } from './pack-sheet.ts';
import { FORMATS, STYLES, styleFigure } from './pack-style.ts';

const LAST_COLUMN = 9;

export function layOutAssumptions(footer: string): SheetLayout {
  return {
    widths: [26, 24, 20, 18, 22, 14, 12, 12, 12],
    frozenColumns: 0,
    frozenRows: 0,
    orientation: 'landscape',
    footer,
  };
}

/** What the plan takes for granted: prices, promotions, holidays, the quality of the fits and what they found. */
export function writeAssumptions(sheet: PackSheet, content: PackContent): void {
  const { prices, promotions, holidays, fits, findings } = content.assumptions;
  sheet.write([{ value: 'Assumptions', style: STYLES.title }], 30);

  writeTable(
    sheet,
    'Promotions',
    ['Promotion', 'Line', 'Items', 'Locations', 'Weeks', 'Mechanic'],
    ['Depth', 'Feature', 'Display'],
    promotions,
    (promotion) => [
      text(promotion.name),
      text(promotion.line),
      text(promotion.items),
      text(promotion.locations),
      text(formatWeeks(promotion.firstWeek, promotion.lastWeek)),
      text(promotion.mechanic),
      figure(promotion.depthFraction, FORMATS.wholePercent),
      figure(promotion.featureFraction, FORMATS.wholePercent),
      figure(promotion.displayFraction, FORMATS.wholePercent),
    ],
  );
  writeTable(sheet, 'Holidays', ['Holiday'], ['Day'], holidays, (holiday) => [
    text(holiday.name),
    { value: toCellDate(holiday.date), style: styleFigure(FORMATS.date) },
  ]);
  writeTable(
    sheet,
    'How well the models fit',
    ['Line', 'Remark', 'Fitted'],
    ['Weeks', 'Series', 'Adjusted R²', 'Residual error', 'Back-test error'],
    fits,
    (fit) => [
      text(fit.line),
      text(fit.remark ?? ''),
      text(fit.fittedAt === null ? 'no fit' : formatInstant(fit.fittedAt, content.timeZone)),
      figure(fit.weeks, FORMATS.wholeUnits),
      figure(fit.series, FORMATS.wholeUnits),
      figure(fit.adjustedRSquared, FORMATS.ratio),
      figure(fit.residualErrorFraction, FORMATS.percent),
      figure(fit.backTestErrorFraction, FORMATS.percent),
    ],
  );
  writeTable(
    sheet,
    'What the fits found',
    ['Line', 'Finding'],
    [],
    findings,
    ({ line, detail }) => [text(line), text(detail)],
    true,
  );
  writeTable(
    sheet,
    `Prices, ${content.currency}`,
    ['Line', 'Item', 'Location', 'Weeks'],
    ['Regular price', 'Price paid'],
    prices,
    (price) => [
      text(price.line),
      text(price.item),
      text(price.location ?? 'All'),
      text(formatWeeks(price.firstWeek, price.lastWeek)),
      figure(price.regularPrice, FORMATS.money),
      figure(price.price, FORMATS.money),
    ],
  );
  sheet.finish();
}

function writeTable<Row>(
  sheet: PackSheet,
  title: string,
  textNames: string[],
  figureNames: string[],
  rows: readonly Row[],
  toCells: (row: Row) => PackCell[],
  isLastTextLong = false,
): void {
  sheet.skip();
  sheet.write([{ value: title, style: STYLES.heading }], 20);
  if (rows.length === 0) {
    sheet.write([{ value: 'None.', style: STYLES.soft }]);
    return;
  }
  sheet.write(
    [
      ...textNames.map((value): PackCell => ({ value, style: STYLES.column })),
      ...figureNames.map((value): PackCell => ({ value, style: STYLES.columnRight })),
    ],
    18,
  );
  for (const row of rows) {
    const cells = toCells(row);
    if (isLastTextLong) {
      const long = cells.at(-1);
      const length = typeof long?.value === 'string' ? long.value.length : 0;
      sheet.writeLastAcross(cells, LAST_COLUMN, 15 * Math.max(1, Math.ceil(length / 125)));
    } else sheet.write(cells, heightOf(cells));
  }
}

/** Rows high enough for their texts, which wrap at some twenty characters. */
function heightOf(cells: readonly PackCell[]): number {
  const longest = Math.max(...cells.map(({ value }) => (typeof value === 'string' ? value.length : 0)));
  return 15 * Math.min(12, Math.max(1, Math.ceil(longest / 24)));
}

function text(value: string): PackCell {
  return { value, style: STYLES.textWrapped };
}

function figure(value: number | null, format: string): PackCell {
  return { value, style: styleFigure(format, 'plain top') };
}

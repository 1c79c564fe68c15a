import type { PackContent, PackOverride } from './pack-content.ts';
import { formatInstant, formatWeeks } from './pack-dates.ts';
import { nameRange, type PackCell, type PackSheet, type SheetLayout } from './pack-sheet.ts';
import { FORMATS, STYLES, styleFigure } from './pack-style.ts';

const EFFECT_COLUMN = 7;

export function layOutOverrides(footer: string): SheetLayout {
  return {
    widths: [18, 18, 20, 24, 22, 10, 10, 12, 22, 44],
    frozenColumns: 0,
    frozenRows: 4,
    titleRow: 4,
    orientation: 'landscape',
    footer,
  };
}

export function writeOverrides(sheet: PackSheet, content: PackContent): void {
  sheet.write([{ value: 'Overrides', style: STYLES.title }], 30);
  sheet.write([
    {
      value:
        'What people changed, in the order in which it was put on the model. Effect: units by which the plan moved.',
      style: STYLES.soft,
    },
  ]);
  sheet.skip();
  sheet.write(
    [
      ...['When', 'Who', 'Line', 'Scope', 'Weeks', 'Operation'].map((value): PackCell => ({
        value,
        style: STYLES.column,
      })),
      { value: 'Value', style: STYLES.columnRight },
      { value: 'Effect, units', style: STYLES.columnRight },
      { value: 'Reason', style: STYLES.columnAfterFigure },
      { value: 'Note', style: STYLES.column },
    ],
    18,
  );
  if (content.overrides.length === 0) {
    sheet.write([{ value: 'None: the plan is the model.', style: STYLES.soft }]);
    sheet.finish();
    return;
  }
  const firstRow = sheet.lastRow + 1;
  for (const override of content.overrides) sheet.write(listCells(override, content.timeZone), heightOf(override));
  const effect = content.overrides.reduce((sum, { effectUnits }) => sum + effectUnits, 0);
  sheet.write([
    { value: 'All', style: STYLES.strongDouble },
    ...Array.from({ length: EFFECT_COLUMN - 1 }, (): PackCell => ({ value: null, style: STYLES.strongDouble })),
    {
      value: { formula: `SUM(${nameRange(EFFECT_COLUMN, firstRow, EFFECT_COLUMN, sheet.lastRow)})`, result: effect },
      style: styleFigure(formatEffect(content.overrides), 'grand total'),
    },
    { value: null, style: STYLES.strongDouble },
    { value: null, style: STYLES.strongDouble },
  ]);
  sheet.finish();
}

function listCells(override: PackOverride, timeZone: string): PackCell[] {
  const texts = [
    formatInstant(override.at, timeZone),
    override.author,
    override.line,
    override.scope,
    formatWeeks(override.firstWeek, override.lastWeek),
    override.operation,
  ];
  return [
    ...texts.map((value): PackCell => ({ value, style: STYLES.textWrapped })),
    {
      value: override.value,
      style: styleFigure(formatValue(override), 'overridden top'),
    },
    { value: override.effectUnits, style: styleFigure(formatEffect([override]), 'plain top') },
    { value: override.reason, style: STYLES.wrappedAfterFigure },
    { value: override.note, style: STYLES.textWrapped },
  ];
}

/** Rows high enough for the longest text at the columns' widths. */
function heightOf(override: PackOverride): number {
  const lines = Math.max(
    (override.note?.length ?? 0) / 44,
    override.reason.length / 22,
    override.scope.length / 23,
    override.line.length / 19,
  );
  return 15 * Math.min(12, Math.max(1, Math.ceil(lines)));
}

function formatValue({ operation, value }: PackOverride): string {
  if (operation === 'scale by') return FORMATS.factor;
  return Number.isInteger(value) ? FORMATS.wholeUnits : FORMATS.partUnits;
}

function formatEffect(overrides: readonly PackOverride[]): string {
  return overrides.every(({ effectUnits }) => Number.isInteger(effectUnits))
    ? FORMATS.signedUnits
    : FORMATS.signedPartUnits;
}

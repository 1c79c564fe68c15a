import type ExcelJS from 'exceljs';
import type { PackLine } from './pack-content.ts';

/** The product's tokens, as a spreadsheet writes colours. */
export const COLOURS = {
  line: 'FFE4DDCF',
  ink: 'FF1E2A26',
  softInk: 'FF55625C',
  moss: 'FF2F5D50',
  sky: 'FF3A6788',
  plum: 'FF6B3F69',
  turmeric: 'FF8A5A00',
  turmericPaper: 'FFF6E3B8',
  madder: 'FFA33A28',
} as const;

const TEXT_FONT = { name: 'Public Sans', family: 2, size: 10 } as const;
const HEADING_FONT = { name: 'Bricolage Grotesque', family: 2, bold: true } as const;
const hairline = { style: 'thin', color: { argb: COLOURS.line } } as const;
const rule = { style: 'thin', color: { argb: COLOURS.ink } } as const;
const double = { style: 'double', color: { argb: COLOURS.ink } } as const;

export const FORMATS = {
  wholeUnits: '#,##0;-#,##0;0',
  partUnits: '#,##0.0##;-#,##0.0##;0',
  signedUnits: '+#,##0;-#,##0;0',
  signedPartUnits: '+#,##0.0##;-#,##0.0##;0',
  money: '#,##0.00;-#,##0.00;0.00',
  percent: '0.0%',
  wholePercent: '0%',
  signedPercent: '+0.0%;-0.0%;0.0%',
  ratio: '0.00',
  factor: '0.000',
  date: 'd mmm yyyy',
  shortDate: 'd mmm',
} as const;

/** Format of units: whole where every planned figure is. */
export function formatUnits(lines: readonly PackLine[]): string {
  const isWhole = lines.every(({ rows }) => rows.every(({ plan }) => plan.every(Number.isInteger)));
  return isWhole ? FORMATS.wholeUnits : FORMATS.partUnits;
}

const font = (changes: Partial<ExcelJS.Font> = {}): Partial<ExcelJS.Font> => ({
  ...TEXT_FONT,
  color: { argb: COLOURS.ink },
  ...changes,
});
const right = { horizontal: 'right', vertical: 'middle' } as const;
const left = { horizontal: 'left', vertical: 'middle' } as const;
const indented = { horizontal: 'left', vertical: 'middle', indent: 1 } as const;
const wrapped = { horizontal: 'left', vertical: 'top', wrapText: true } as const;

/** Shared style objects: exceljs knows a style again by identity, and each is written once. */
export const STYLES = {
  title: { font: { ...HEADING_FONT, size: 20, color: { argb: COLOURS.ink } }, alignment: left },
  heading: { font: { ...HEADING_FONT, size: 12, color: { argb: COLOURS.ink } }, alignment: left },
  soft: { font: font({ color: { argb: COLOURS.softInk } }), alignment: left },
  softWrapped: { font: font({ color: { argb: COLOURS.softInk } }), alignment: wrapped },
  column: {
    font: font({ size: 9, color: { argb: COLOURS.softInk } }),
    alignment: { ...left, vertical: 'bottom', wrapText: true },
    border: { bottom: rule },
  },
  columnRight: {
    font: font({ size: 9, color: { argb: COLOURS.softInk } }),
    alignment: { ...right, vertical: 'bottom', wrapText: true },
    border: { bottom: rule },
  },
  columnBare: { font: font({ size: 9, color: { argb: COLOURS.softInk } }), alignment: left },
  columnBareRight: { font: font({ size: 9, bold: true, color: { argb: COLOURS.ink } }), alignment: right },
  columnAfterFigure: {
    font: font({ size: 9, color: { argb: COLOURS.softInk } }),
    alignment: { ...indented, vertical: 'bottom' },
    border: { bottom: rule },
  },
  textAfterFigure: { font: font(), alignment: indented, border: { bottom: hairline } },
  wrappedAfterFigure: { font: font(), alignment: { ...wrapped, indent: 1 }, border: { bottom: hairline } },
  strongDouble: { font: font({ bold: true }), alignment: left, border: { top: rule, bottom: double } },
  text: { font: font(), alignment: left, border: { bottom: hairline } },
  textWrapped: { font: font(), alignment: wrapped, border: { bottom: hairline } },
  label: { font: font({ color: { argb: COLOURS.softInk } }), alignment: left, border: { bottom: hairline } },
  strong: { font: font({ bold: true }), alignment: left, border: { top: rule, bottom: rule } },
  caution: { font: font({ color: { argb: COLOURS.turmeric } }), alignment: wrapped },
  conflict: {
    font: font({ bold: true, color: { argb: COLOURS.madder } }),
    alignment: indented,
    border: { bottom: hairline },
  },
  checksum: {
    font: { ...TEXT_FONT, name: 'Courier New', family: 3, size: 9, color: { argb: COLOURS.ink } },
    alignment: left,
    border: { bottom: hairline },
  },
} satisfies Record<string, Partial<ExcelJS.Style>>;

export type FigureTone =
  | 'plain'
  | 'overridden'
  | 'promoted'
  | 'overridden promoted'
  | 'model'
  | 'soft'
  | 'total'
  | 'grand total'
  | 'plain top'
  | 'overridden top';

const figureStyles = new Map<string, Partial<ExcelJS.Style>>();

/** Style of a figure: right-aligned, with the mark of its meaning beside the colour (bold plum, turmeric paper, rules). */
export function styleFigure(format: string, tone: FigureTone = 'plain'): Partial<ExcelJS.Style> {
  const key = `${tone} ${format}`;
  let style = figureStyles.get(key);
  if (!style) {
    style = { numFmt: format, alignment: right, ...dressFigure(tone) };
    figureStyles.set(key, style);
  }
  return style;
}

function dressFigure(tone: FigureTone): Partial<ExcelJS.Style> {
  const border = { bottom: hairline };
  const fill = { type: 'pattern', pattern: 'solid', fgColor: { argb: COLOURS.turmericPaper } } as const;
  const plum = font({ color: { argb: COLOURS.plum }, underline: true });
  switch (tone) {
    case 'plain':
      return { font: font(), border };
    case 'overridden':
      return { font: plum, border };
    case 'promoted':
      return { font: font(), border, fill };
    case 'overridden promoted':
      return { font: plum, border, fill };
    case 'model':
      return { font: font({ color: { argb: COLOURS.sky } }), border };
    case 'soft':
      return { font: font({ color: { argb: COLOURS.softInk } }), border };
    case 'total':
      return { font: font({ bold: true }), border: { top: rule, bottom: rule } };
    case 'plain top':
      return { font: font(), border, alignment: { ...right, vertical: 'top' } };
    case 'overridden top':
      return { font: plum, border, alignment: { ...right, vertical: 'top' } };
    case 'grand total':
      return { font: font({ bold: true }), border: { top: rule, bottom: double } };
  }
}

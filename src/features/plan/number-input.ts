/** Reading numbers as people type and paste them: grouping, either decimal mark, signs of every kind. */

export type DecimalMark = '.' | ',';

const groupSpaces = /[\s\u00a0\u202f\u2009'’]/g;
const minusSigns = /^[-−–]/;

/** Decimal mark of a locale, as its numbers are written. */
export function decimalMarkOf(locale: string | undefined): DecimalMark {
  const part = new Intl.NumberFormat(locale).formatToParts(1.5).find((each) => each.type === 'decimal');
  return part?.value === ',' ? ',' : '.';
}

/**
 * The number that a text means when `mark` divides its decimals and the other mark groups its thousands; null where it can't be read so.
 * Takes spaces and apostrophes as grouping, a sign before the figures, brackets as a minus.
 */
export function readNumber(text: string, mark: DecimalMark): number | null {
  let figures = text.trim();
  let isNegative = false;
  const bracketed = /^\((.*)\)$/.exec(figures);
  if (bracketed) {
    isNegative = true;
    figures = (bracketed[1] ?? '').trim();
  }
  if (minusSigns.test(figures)) {
    if (isNegative) return null;
    isNegative = true;
    figures = figures.slice(1);
  } else if (figures.startsWith('+')) {
    figures = figures.slice(1);
  }
  figures = figures.replace(groupSpaces, '');
  const group = mark === '.' ? ',' : '.';
  const parts = figures.split(mark);
  if (parts.length > 2) return null;
  const [whole = '', decimals] = parts;
  if (decimals !== undefined && !/^\d*$/.test(decimals)) return null;
  const isPlain = /^\d+$/.test(whole) || (whole === '' && !!decimals);
  const isGrouped = new RegExp(`^\\d{1,3}(\\${group}\\d{3})+$`).test(whole);
  if (!isPlain && !isGrouped) return null;
  const value = Number(`${whole.replaceAll(group, '') || '0'}.${decimals || '0'}`);
  if (!Number.isFinite(value)) return null;
  return isNegative && value !== 0 ? -value : value;
}

/** What one person typed: read with the mark of their locale, or with the other one where only that makes sense. */
export function readTypedNumber(text: string, mark: DecimalMark): number | null {
  return readNumber(text, mark) ?? readNumber(text, mark === '.' ? ',' : '.');
}

/** A factor as typed: `1.05`, `105 %`, or a change such as `+5 %` and `−5 %`. */
export function readFactor(text: string, mark: DecimalMark): number | null {
  const percent = /^(.*?)\s*%$/.exec(text.trim());
  if (!percent) return readTypedNumber(text, mark);
  const share = readTypedNumber(percent[1] ?? '', mark);
  if (share === null) return null;
  const isChange = /^[-−–+]/.test(text.trim());
  return Number(((isChange ? 100 + share : share) / 100).toFixed(12));
}

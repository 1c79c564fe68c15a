import type { CellValue } from './table.ts';

export type DecimalSign = '.' | ',';

const MISSING = /^(|[-–—]|n\/?a|null|nil|none)$/i;
const LARGEST = 1e12;
const PLAIN = /^-?\d{1,11}(\.\d+)?$/;
const PLAIN_WHOLE = /^-?\d{1,11}$/;

export interface NumberReading {
  value: number;
  /** Written as a text that had to be understood: a grouped, signed, currency or percent figure, or a number stored as text. */
  isFromText: boolean;
}

/**
 * Number of a cell; null where the cell says that there is none; `unreadable` otherwise. Texts may carry spaces, a currency sign or
 * code, thousands separators in full groups of three, a leading, trailing or bracketed minus, and a percent sign (divides by 100).
 */
export function readNumber(cell: CellValue, decimalSign: DecimalSign): NumberReading | null | 'unreadable' {
  if (cell === null) return null;
  if (typeof cell === 'number') return Math.abs(cell) < LARGEST ? { value: cell, isFromText: false } : 'unreadable';
  if (typeof cell === 'boolean') return { value: cell ? 1 : 0, isFromText: true };
  if (typeof cell !== 'string') return 'unreadable';
  const trimmed = cell.trim();
  // Most cells are plain; asking for that first takes a third off the time of a text file (200,000 rows: 1.2 s instead of 1.85 s).
  if ((decimalSign === '.' ? PLAIN : PLAIN_WHOLE).test(trimmed)) return { value: Number(trimmed), isFromText: true };
  if (MISSING.test(trimmed)) return null;
  const plain = stripNumber(trimmed);
  const bare = (
    decimalSign === ','
      ? /^(\d{1,3}([.'’]\d{3})+|\d*)(,\d+)?$/
      : /^(\d{1,3}([,'’]\d{3})+|\d*)(\.\d+)?(e[+-]?\d{1,2})?$/i
  ).test(plain.digits);
  if (!bare || !/\d/.test(plain.digits)) return 'unreadable';
  const standard =
    decimalSign === ',' ? plain.digits.replace(/[.'’]/g, '').replace(',', '.') : plain.digits.replace(/[,'’]/g, '');
  const value = (Number(standard) * (plain.isNegative ? -1 : 1)) / (plain.isPercent ? 100 : 1);
  return Number.isFinite(value) && Math.abs(value) < LARGEST ? { value, isFromText: true } : 'unreadable';
}

const YES = /^(y|yes|true|x|on|✓|✔)$/i;
const NO = /^(n|no|false|off)$/i;

/** Like `readNumber` for shares; understands yes and no. `percent` divides bare figures by 100. */
export function readShare(
  cell: CellValue,
  decimalSign: DecimalSign,
  scale: 'fraction' | 'percent',
): NumberReading | null | 'unreadable' {
  if (typeof cell === 'string') {
    const text = cell.trim();
    if (YES.test(text)) return { value: 1, isFromText: true };
    if (NO.test(text)) return { value: 0, isFromText: true };
  }
  const reading = readNumber(cell, decimalSign);
  if (reading === null || reading === 'unreadable' || scale === 'fraction' || typeof cell === 'boolean') return reading;
  const isMarked = typeof cell === 'string' && cell.includes('%');
  return isMarked ? reading : { ...reading, value: reading.value / 100 };
}

/** Which decimal sign a text number shows: by the last of two signs, or by digits that can't be a group of three. Null if it shows none. */
export function detectDecimalSign(text: string): DecimalSign | 'either' | null {
  const { digits } = stripNumber(text.trim());
  if (!/^[\d.,'’]+$/.test(digits) || !/\d/.test(digits)) return null;
  const points = digits.split('.').length - 1;
  const commas = digits.split(',').length - 1;
  if (points === 0 && commas === 0) return null;
  if (points > 0 && commas > 0) return digits.lastIndexOf('.') > digits.lastIndexOf(',') ? '.' : ',';
  if (points > 1) return ',';
  if (commas > 1) return '.';
  const sign = points === 1 ? '.' : ',';
  return /^[1-9]\d{0,2}[.,]\d{3}$/.test(digits) ? 'either' : sign;
}

function stripNumber(text: string): { digits: string; isNegative: boolean; isPercent: boolean } {
  let digits = text
    .replace(/[\s\u00a0\u2007\u202f]/g, '')
    .replace(/[\u2212\u2010-\u2013]/g, '-')
    .replace(/\p{Sc}/gu, '')
    .replace(/^[A-Z]{3}(?=[-+(\d])|(?<=[\d)-])[A-Z]{3}$/, '');
  const isPercent = digits.endsWith('%');
  if (isPercent) digits = digits.slice(0, -1);
  let isNegative = false;
  if (/^\(.*\)$/.test(digits)) {
    isNegative = true;
    digits = digits.slice(1, -1);
  } else if (/^-|-$/.test(digits)) {
    isNegative = true;
    digits = digits.replace(/^-|-$/, '');
  } else if (digits.startsWith('+')) digits = digits.slice(1);
  return { digits, isNegative, isPercent };
}

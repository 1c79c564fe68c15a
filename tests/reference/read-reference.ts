import { readFileSync } from 'node:fs';
import { gunzipSync } from 'node:zlib';

function locate(path: string): URL {
  return new URL(path, import.meta.url);
}

/** A reference file in JSON; `path` is relative to this folder. */
export function readReferenceJson(path: string): unknown {
  return JSON.parse(readFileSync(locate(path), 'utf8'));
}

export type ReferenceRow = Readonly<Record<string, string>>;

/** A reference file in CSV (no quoted commas), plain or gzipped, as rows of texts by column name. */
export function readReferenceCsv(path: string): ReferenceRow[] {
  const bytes = readFileSync(locate(path));
  const text = (path.endsWith('.gz') ? gunzipSync(bytes) : bytes).toString('utf8');
  const lines = text.trim().split(/\r?\n/);
  const split = (line: string): string[] => line.split(',').map((cell) => cell.replace(/^"|"$/g, ''));
  const names = split(lines[0]!);
  return lines.slice(1).map((line) => Object.fromEntries(split(line).map((cell, k) => [names[k]!, cell])));
}

/** One column as numbers. */
export function readColumn(rows: readonly ReferenceRow[], name: string): Float64Array {
  return Float64Array.from(rows, (row) => {
    const value = Number(row[name]);
    if (row[name] === undefined || row[name] === '' || Number.isNaN(value)) throw new Error(`no number in ${name}`);
    return value;
  });
}

/** Correct significant digits of a value against an expected one: −log10 of the relative error (of the absolute one at 0), at most 15. */
export function countCorrectDigits(value: number, expected: number): number {
  if (value === expected) return 15;
  const error = expected === 0 ? Math.abs(value) : Math.abs(value - expected) / Math.abs(expected);
  return Math.max(0, Math.min(15, -Math.log10(error)));
}

/** The fewest correct digits in a list. */
export function countWorstDigits(values: ArrayLike<number>, expected: ArrayLike<number>): number {
  if (values.length !== expected.length) throw new Error(`${values.length} values against ${expected.length}`);
  return Array.from(values, (value, k) => countCorrectDigits(value, expected[k]!)).reduce((a, b) => Math.min(a, b), 15);
}

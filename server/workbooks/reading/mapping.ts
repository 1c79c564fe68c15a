import { createHash } from 'node:crypto';
import { shareMeanings, type ColumnMeaning } from '../../../shared/domain/column-meanings.ts';
import { matchCanonicalName, matchHeaderName, nameMechanic, simplifyName, type NameMatch } from './header-words.ts';
import { detectDecimalSign, readNumber } from './number-reading.ts';
import type { CellValue, TableRow } from './table.ts';
import { readWeekCell } from './week-reading.ts';

export type ImportKind = 'sales' | 'calendar';

export interface MappedColumn {
  /** 0-based. */
  column: number;
  meaning: ColumnMeaning;
  /** For `mechanic`: its name in small letters, digits and underscores. */
  mechanic?: string;
  /** For shares: whether bare figures are fractions or percents. */
  scale?: 'fraction' | 'percent';
}

export interface ColumnProposal extends MappedColumn {
  name: string;
  /** 0…1; 1 only where the file is in the canonical format. */
  confidence: number;
  reason: 'canonical' | 'name' | 'content' | 'none';
  /** The first different cells, as a person would read them. */
  samples: string[];
}

interface ContentFacts {
  filled: number;
  distinct: number;
  /** Shares of the filled cells. */
  week: number;
  named: number;
  number: number;
  integer: number;
  fraction: number;
  percent: number;
  negative: number;
  truth: number;
  code: number;
  phrase: number;
}

const SAMPLE_ROWS = 500;
const MANY: ReadonlySet<ColumnMeaning> = new Set(['mechanic', 'ignore']);
const PRICE_OR_PROMOTION: ReadonlySet<ColumnMeaning> = new Set<ColumnMeaning>([
  'price',
  'regularPrice',
  'depth',
  'feature',
  'display',
  'mechanic',
  'promotionName',
]);

/**
 * Proposes what each column means, from its name and the look of its cells. A file in the canonical format (`week` and `item` among
 * the names, all names canonical) is certain. Each meaning is given once, to the surest column.
 */
export function proposeMapping(names: readonly string[], sampleRows: readonly TableRow[]): ColumnProposal[] {
  const width = Math.max(names.length, ...sampleRows.slice(0, SAMPLE_ROWS).map((row) => row.cells.length));
  const rows = sampleRows.slice(0, SAMPLE_ROWS);
  const columns = Array.from({ length: width }, (_, column) => {
    const name = names[column] ?? '';
    const cells = rows.map((row) => row.cells[column] ?? null);
    return { column, name, cells, facts: describeContent(cells) };
  });
  const isCanonical = ['week', 'item'].every((name) => names.some((other) => other.trim() === name));

  const chosen = new Map<number, { match: NameMatch; reason: ColumnProposal['reason'] }>();
  const taken = new Set<ColumnMeaning>();
  const candidates = columns.flatMap(({ column, name, facts }) =>
    listCandidates(name, facts, isCanonical).map((candidate) => ({ column, ...candidate })),
  );
  candidates.sort((left, right) => right.match.confidence - left.match.confidence || left.column - right.column);
  for (const { column, match, reason } of candidates) {
    if (match.confidence < 0.35 || chosen.has(column) || (!MANY.has(match.meaning) && taken.has(match.meaning)))
      continue;
    chosen.set(column, { match, reason });
    taken.add(match.meaning);
  }
  letNamesServeAsCodes(chosen, taken);

  return columns.map(({ column, name, cells, facts }) => {
    const choice = chosen.get(column);
    const meaning = choice?.match.meaning ?? 'ignore';
    return {
      column,
      name,
      meaning,
      ...(meaning === 'mechanic' ? { mechanic: choice?.match.mechanic ?? nameMechanic(name) } : {}),
      ...(shareMeanings.includes(meaning)
        ? { scale: facts.percent > 0 ? ('percent' as const) : ('fraction' as const) }
        : {}),
      confidence: Math.round((choice?.match.confidence ?? 0) * 100) / 100,
      reason: choice?.reason ?? 'none',
      samples: listSamples(cells),
    };
  });
}

/** Sales where units are there, a calendar of planned prices and promotions where they are not; null where it can't be either. */
export function proposeKind(columns: readonly MappedColumn[]): ImportKind | null {
  const meanings = new Set(columns.map(({ meaning }) => meaning));
  if (meanings.has('units')) return 'sales';
  return [...meanings].some((meaning) => PRICE_OR_PROMOTION.has(meaning)) ? 'calendar' : null;
}

/** Meanings without which rows can't be taken and that no column has. */
export function listMissingMeanings(columns: readonly MappedColumn[]): ColumnMeaning[] {
  const meanings = new Set(columns.map(({ meaning }) => meaning));
  const missing = (['week', 'item'] as const).filter((meaning) => !meanings.has(meaning));
  return proposeKind(columns) === null ? [...missing, 'units'] : missing;
}

/** The same for files whose columns are named alike, whatever their spelling: the key under which a mapping is remembered. */
export function fingerprintHeader(names: readonly string[]): string {
  const simple = names.map((name) => simplifyName(name) || name.trim());
  while (simple.at(-1) === '') simple.pop();
  return createHash('sha256').update(JSON.stringify(simple)).digest('hex');
}

/** Percents: no value below zero, and most of those that say anything lie above 1. A single 3 among ones is a slip, no percent. */
function isMostlyAboveOne(values: readonly number[]): boolean {
  const telling = values.filter((value) => value !== 0);
  return telling.every((value) => value > 0) && telling.filter((value) => value > 1).length * 2 > telling.length;
}

function listCandidates(name: string, facts: ContentFacts, isCanonical: boolean) {
  const canonical = isCanonical ? matchCanonicalName(name) : null;
  if (canonical) return [{ match: canonical, reason: 'canonical' as const }];
  const byName = matchHeaderName(name).map((match) => ({
    match: { ...match, confidence: Math.min(0.99, match.confidence * judgeContent(match.meaning, facts)) },
    reason: 'name' as const,
  }));
  const isWeekByContent =
    facts.filled > 0 && facts.week > 0.9 && (facts.named > 0.9 || facts.distinct > 1 || facts.filled === 1);
  const hasWeekName = byName.some(({ match }) => match.meaning === 'week');
  return isWeekByContent && !hasWeekName
    ? [...byName, { match: { meaning: 'week' as const, confidence: 0.6 }, reason: 'content' as const }]
    : byName;
}

/** Factor on the confidence that a name gives, from the cells below it. */
function judgeContent(meaning: ColumnMeaning, facts: ContentFacts): number {
  if (facts.filled === 0) return 0.8;
  switch (meaning) {
    case 'week':
      return facts.week > 0.8 ? 1.05 : 0.35;
    case 'units':
    case 'netValue':
      return facts.number > 0.8 && facts.named < 0.5 ? (meaning === 'units' ? 0.97 : 1) + 0.03 * facts.integer : 0.2;
    case 'price':
    case 'regularPrice':
      return facts.number > 0.8 && facts.negative === 0 ? 1.03 : 0.2;
    case 'depth':
    case 'gap':
      return facts.fraction > 0.9 || facts.percent > 0 ? 1.03 : 0.2;
    case 'feature':
    case 'display':
    case 'mechanic':
      return facts.fraction + facts.truth > 0.9 || facts.percent > 0 ? 1.03 : 0.2;
    case 'daysOpen':
      return facts.number > 0.8 ? 1.03 : 0.2;
    case 'promotionName':
      return facts.number + facts.truth > 0.8 ? 0.2 : 1;
    case 'itemName':
      return facts.phrase > 0.4 ? 1.06 : facts.number > 0.5 ? 0.4 : 0.9;
    case 'item':
      return facts.code > 0.5 || facts.integer > 0.8 ? 1.03 : facts.number > 0.5 ? 0.4 : 0.9;
    case 'category':
    case 'line':
    case 'location':
      return facts.number - facts.integer > 0.3 ? 0.3 : 1;
    case 'ignore':
      return 1;
  }
}

function describeContent(cells: readonly CellValue[]): ContentFacts {
  const filled = cells.filter((cell) => cell !== null);
  const share = (test: (cell: CellValue) => boolean) =>
    filled.length === 0 ? 0 : filled.filter(test).length / filled.length;
  const texts = filled.map((cell) => (typeof cell === 'object' && cell !== null ? cell.date : String(cell)));
  const decimalSign = texts.some((text) => detectDecimalSign(text) === ',') ? ',' : '.';
  const numbers = filled.map((cell) => readNumber(cell, decimalSign));
  const values = numbers.flatMap((reading) => (reading !== null && reading !== 'unreadable' ? [reading.value] : []));
  const form = { dateOrder: 'day-first', yearNumberIs: 'week', hasDatesFrom1904: false } as const;
  const isWeek = (cell: CellValue) => readWeekCell(cell, form).type !== 'unreadable';
  const isNamed = (cell: CellValue) => isWeek(cell) && !(typeof cell === 'number' && cell > 19_999 && cell < 100_000);
  const count = (test: (value: number) => boolean) =>
    filled.length === 0 ? 0 : values.filter(test).length / filled.length;
  const largest = Math.max(0, ...values);
  const isAllRatio = values.length > 0 && values.every((value) => value >= 0 && value <= 1);
  return {
    filled: filled.length,
    distinct: new Set(texts).size,
    week: share(isWeek),
    named: share(isNamed),
    number: count(() => true),
    integer: count(Number.isInteger),
    fraction: count((value) => value >= 0 && value <= 1),
    percent: !isAllRatio && largest > 1 && largest <= 100 && isMostlyAboveOne(values) ? 1 : 0,
    negative: count((value) => value < 0),
    truth: share((cell) => typeof cell === 'string' && /^(y|yes|n|no|true|false|x|on|off|✓|✔)$/i.test(cell.trim())),
    code: share((cell) => typeof cell === 'string' && /^\S*\d\S*$/.test(cell.trim())),
    phrase: share((cell) => typeof cell === 'string' && /\p{L}\s+\S|\p{L}{6,}/u.test(cell)),
  };
}

/** A file with item names but no codes: the names are what tells items apart. */
function letNamesServeAsCodes(
  chosen: Map<number, { match: NameMatch; reason: ColumnProposal['reason'] }>,
  taken: Set<ColumnMeaning>,
): void {
  if (taken.has('item')) return;
  for (const [column, choice] of chosen) {
    if (choice.match.meaning !== 'itemName') continue;
    chosen.set(column, { ...choice, match: { meaning: 'item', confidence: Math.min(choice.match.confidence, 0.6) } });
    return;
  }
}

function listSamples(cells: readonly CellValue[]): string[] {
  const samples = new Set<string>();
  for (const cell of cells) {
    if (cell === null) continue;
    samples.add(typeof cell === 'object' ? cell.date : String(cell).slice(0, 60));
    if (samples.size === 3) break;
  }
  return [...samples];
}

/** What a figure has to keep to; `goal` is what is aimed at beyond `must`. */
export interface Bounds {
  must: Bound | null;
  goal: Bound | null;
}

export type Bound = { atMost: number } | { atLeast: number };

/** One line of the table that the bench prints. */
export interface Figure extends Bounds {
  row: string;
  /** What was done, and beside what. */
  work: string;
  ours: string;
  /** What the peer or floor took; '–' where the bound is an amount of its own. */
  beside: string;
  value: number;
  /** '×', 's', 'MB' … */
  unit: string;
}

export interface BenchRow {
  name: string;
  run: (trial: Trial) => Promise<Figure[]>;
}

export interface Trial {
  say: (line: string) => void;
  /** Lines of the category that is forecast; 500 unless less is asked for to try the bench itself. */
  lines: number;
}

export const noBounds: Bounds = { must: null, goal: null };

/** Length of one call in milliseconds; a contender that times itself (another process) answers its own. */
export type Contender = () => number | Promise<number>;

/** The medians of `rounds` turns, everyone once in each turn, after a turn that isn't counted. */
export async function takeTurns<Name extends string>(
  contenders: Record<Name, Contender>,
  rounds: number,
): Promise<Record<Name, number>> {
  const names = Object.keys(contenders) as Name[];
  const lengths = new Map<Name, number[]>(names.map((name) => [name, []]));
  for (let round = 0; round <= rounds; round += 1) {
    for (const name of names) {
      const length = await contenders[name]();
      if (round > 0) lengths.get(name)!.push(length);
    }
  }
  return Object.fromEntries(names.map((name) => [name, median(lengths.get(name)!)])) as Record<Name, number>;
}

/** Milliseconds per call of `work`, called `calls` times in a row. */
export function timeCalls(work: () => unknown, calls: number): number {
  const startedAt = performance.now();
  for (let call = 0; call < calls; call += 1) work();
  return (performance.now() - startedAt) / calls;
}

/** Milliseconds of one asynchronous call. */
export async function timeOnce(work: () => Promise<unknown>): Promise<number> {
  const startedAt = performance.now();
  await work();
  return performance.now() - startedAt;
}

export function median(values: readonly number[]): number {
  const sorted = [...values].sort((a, b) => a - b);
  const middle = sorted.length >> 1;
  return sorted.length % 2 === 1 ? sorted[middle]! : (sorted[middle - 1]! + sorted[middle]!) / 2;
}

export function writeDuration(milliseconds: number): string {
  if (milliseconds < 10) return `${milliseconds.toFixed(2)} ms`;
  if (milliseconds < 1000) return `${milliseconds.toFixed(0)} ms`;
  if (milliseconds < 120_000) return `${(milliseconds / 1000).toFixed(2)} s`;
  return `${(milliseconds / 60_000).toFixed(1)} min`;
}

/** How much longer than in proportion the whole took: (whole / part) ÷ (size of whole / size of part). */
export function compareGrowth(part: { size: number; length: number }, whole: { size: number; length: number }): number {
  return whole.length / part.length / (whole.size / part.size);
}

import type { Bound, Figure } from './measure.ts';

const headings = ['row', 'work', 'took', 'beside', 'figure', 'must', 'goal'] as const;

/** A table of all figures with whether each bound holds. */
export function printFigures(figures: readonly Figure[]): void {
  const rows = figures.map((figure) => [
    figure.row,
    figure.work,
    figure.ours,
    figure.beside,
    `${writeNumber(figure.value)} ${figure.unit}`,
    judge(figure, figure.must),
    judge(figure, figure.goal),
  ]);
  const widths = headings.map((heading, column) =>
    Math.max(heading.length, ...rows.map((row) => row[column]?.length ?? 0)),
  );
  const write = (cells: readonly string[]) => cells.map((cell, column) => cell.padEnd(widths[column] ?? 0)).join('  ');
  console.log(['', write(headings), write(widths.map((width) => '─'.repeat(width))), ...rows.map(write)].join('\n'));
}

/** Figures that break their must. */
export function listMissed(figures: readonly Figure[]): Figure[] {
  return figures.filter(({ must, value }) => must !== null && !holds(must, value));
}

function judge({ value, unit }: Figure, bound: Bound | null): string {
  if (bound === null) return '–';
  const limit =
    'atMost' in bound ? `≤ ${writeNumber(bound.atMost)} ${unit}` : `≥ ${writeNumber(bound.atLeast)} ${unit}`;
  return `${limit} ${holds(bound, value) ? 'holds' : 'MISSED'}`;
}

function holds(bound: Bound, value: number): boolean {
  return 'atMost' in bound ? value <= bound.atMost : value >= bound.atLeast;
}

function writeNumber(value: number): string {
  return value >= 100 ? Math.round(value).toLocaleString('en') : String(Number(value.toPrecision(3)));
}

interface LineTotals {
  sold: readonly (number | null)[];
  model: readonly number[];
  plan: readonly number[];
}

/** Sum of lines week by week; history is null where no line knows anything. */
export function sumLines(
  lines: readonly LineTotals[],
  planWeeks: number,
): { sold: (number | null)[]; model: number[]; plan: number[] } {
  const soldWeeks = Math.max(0, ...lines.map(({ sold }) => sold.length));
  const sold = Array.from({ length: soldWeeks }, (_, week) =>
    lines.reduce<number | null>((sum, line) => {
      const units = line.sold[week];
      return units === null || units === undefined ? sum : (sum ?? 0) + units;
    }, null),
  );
  const sumOf = (values: (line: LineTotals) => readonly number[]) =>
    Array.from({ length: planWeeks }, (_, week) => {
      const sum = lines.reduce((units, line) => units + (values(line)[week] ?? 0), 0);
      return Math.round(sum * 1e6) / 1e6;
    });
  return { sold, model: sumOf(({ model }) => model), plan: sumOf(({ plan }) => plan) };
}

import type { FittedRows } from '../../../../server/forecasting/diagnosis/fitted-rows.ts';
import { fitLeastSquares } from '../../../../shared/statistics/regression/least-squares.ts';

export interface AbsorbedInput {
  /** Line's columns first; name per column. */
  names: readonly string[];
  /** rows × columns, row-major, not centred. */
  design: Float64Array;
  response: Float64Array;
  weights?: Float64Array;
  /** Sorted; one label per row. */
  series: readonly string[];
  weeks: ArrayLike<number>;
  /** Number of leading columns that are the line's; the others are deviations. */
  lineColumns?: number;
  /** Ridge penalty per column; none if missing. */
  penalties?: Float64Array;
}

/** A fit with absorbed series intercepts, as the forecasting code makes one: centring within series, then the QR kernel. */
export function fitAbsorbed(input: AbsorbedInput): FittedRows {
  const { names, response, series, lineColumns = names.length } = input;
  const rows = response.length;
  const columns = names.length;
  const weights = input.weights ?? new Float64Array(rows).fill(1);
  const penalties = input.penalties ?? new Float64Array(columns);
  const labels = [...new Set(series)];
  const index = Int32Array.from(series, (label) => labels.indexOf(label));
  const weightSums = new Float64Array(labels.length);
  const means = labels.map(() => new Float64Array(columns + 1));
  for (let i = 0; i < rows; i++) {
    weightSums[index[i]!]! += weights[i]!;
    const mean = means[index[i]!]!;
    for (let j = 0; j < columns; j++) mean[j]! += weights[i]! * input.design[i * columns + j]!;
    mean[columns]! += weights[i]! * response[i]!;
  }
  const design = new Float64Array(rows * columns);
  const centred = new Float64Array(rows);
  for (let i = 0; i < rows; i++) {
    const s = index[i]!;
    for (let j = 0; j < columns; j++) {
      design[i * columns + j] = input.design[i * columns + j]! - means[s]![j]! / weightSums[s]!;
    }
    centred[i] = response[i]! - means[s]![columns]! / weightSums[s]!;
  }
  const fit = fitLeastSquares({ design, rows, columns, response: centred, weights, penalties });
  const firstWeek = Array.from(input.weeks).reduce((a, b) => Math.min(a, b));
  const lastWeek = Array.from(input.weeks).reduce((a, b) => Math.max(a, b));
  return {
    design,
    columns,
    response,
    weights,
    residuals: fit.residuals,
    leverages: fit.hatDiagonal.map((leverage, i) => leverage + weights[i]! / weightSums[index[i]!]!),
    series: index,
    weeks: Int32Array.from(input.weeks, (week) => week - firstWeek),
    weekStarts: Array.from({ length: lastWeek - firstWeek + 1 }, (_, t) => `week ${firstWeek + t}`),
    seriesOf: labels.map((label) => ({ item: 'one', location: label })),
    effects: names.slice(0, lineColumns).map((name, k) => ({
      name,
      group: 'price',
      column: k,
      estimate: fit.coefficients[k] ?? 0,
      items: [],
      locations: [],
    })),
    penalties,
    rank: fit.rank,
    kept: fit.kept,
    factorR: fit.factorR,
    isPseudoLikelihood: false,
  };
}

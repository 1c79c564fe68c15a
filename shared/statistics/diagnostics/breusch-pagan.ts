import { computeChiSquareTail } from '../distributions/chi-square.ts';
import { InvalidInputError, UndefinedStatisticError } from '../errors.ts';
import { fitLeastSquaresFast } from '../regression/fast-least-squares.ts';
import { fitLeastSquares } from '../regression/least-squares.ts';
import type { LeastSquaresInput } from '../regression/types.ts';

export interface ChiSquareTest {
  statistic: number;
  degrees: number;
  p: number;
}

/**
 * Breusch–Pagan test of residuals against the columns of their own design, which must span an intercept.
 * 'koenker': n·R² of e² (Koenker 1981, robust to non-normal residuals); 'original': half the explained sum of squares of e² / (Σe² / n)
 * (Breusch & Pagan 1979). Checked against R's lmtest::bptest. Throws InvalidInputError for a weighted or penalised design.
 */
export function testBreuschPagan(
  input: LeastSquaresInput,
  residuals: Float64Array,
  kind: 'koenker' | 'original',
): ChiSquareTest {
  if (input.weights || input.penalties) throw new InvalidInputError('the test takes an unweighted, unpenalised design');
  const squares = residuals.map((residual) => residual * residual);
  const mean = squares.reduce((sum, square) => sum + square, 0) / squares.length;
  if (mean === 0) throw new UndefinedStatisticError('without residuals there is no spread to test');
  const scaled = squares.map((square) => square / mean);
  const fit = fitLeastSquares({ design: input.design, rows: input.rows, columns: input.columns, response: scaled });
  const total = scaled.reduce((sum, value) => sum + (value - 1) ** 2, 0);
  if (total === 0) throw new UndefinedStatisticError('all squared residuals are equal');
  const explained = total - fit.residualSumOfSquares;
  const statistic = kind === 'koenker' ? (squares.length * explained) / total : explained / 2;
  const degrees = fit.rank - 1;
  if (degrees < 1) throw new InvalidInputError('the test needs a column beside the intercept');
  return { statistic, degrees, p: computeChiSquareTail(Math.max(0, statistic), degrees) };
}

/**
 * Koenker's test against the columns of `input` and one intercept per series, these absorbed by centring within the series: statistic and degrees
 * are those of a design with a dummy for each. series: one label per row. Checked against R's lmtest::bptest on the explicit dummies.
 * Throws InvalidInputError for a weighted or penalised design or if there is nothing to test against.
 */
export function testBreuschPaganWithinSeries(
  input: LeastSquaresInput,
  residuals: Float64Array,
  series: ArrayLike<number | string>,
): ChiSquareTest {
  if (input.weights || input.penalties) throw new InvalidInputError('the test takes an unweighted, unpenalised design');
  const { rows, columns } = input;
  const squares = residuals.map((residual) => residual * residual);
  const mean = squares.reduce((sum, square) => sum + square, 0) / rows;
  const total = squares.reduce((sum, square) => sum + (square - mean) ** 2, 0);
  if (total === 0) throw new UndefinedStatisticError('all squared residuals are equal');
  const members = new Map<number | string, number[]>();
  for (let i = 0; i < rows; i++) {
    const own = members.get(series[i]!);
    if (own) own.push(i);
    else members.set(series[i]!, [i]);
  }
  const design = input.design.slice();
  const centred = squares.slice();
  let explained = 0;
  for (const own of members.values()) {
    for (let j = 0; j < columns; j++) {
      const average = own.reduce((sum, i) => sum + design[i * columns + j]!, 0) / own.length;
      for (const i of own) design[i * columns + j]! -= average;
    }
    const average = own.reduce((sum, i) => sum + squares[i]!, 0) / own.length;
    for (const i of own) centred[i]! -= average;
    explained += own.length * (average - mean) ** 2;
  }
  let rank = 0;
  if (columns > 0) {
    const fit = fitLeastSquaresFast({ design, rows, columns, response: centred });
    rank = fit.rank;
    explained += centred.reduce((sum, value) => sum + value * value, 0) - fit.residualSumOfSquares;
  }
  const degrees = members.size - 1 + rank;
  if (degrees < 1) throw new InvalidInputError('the test needs a column beside the intercept');
  const statistic = (rows * explained) / total;
  return { statistic, degrees, p: computeChiSquareTail(Math.max(0, statistic), degrees) };
}

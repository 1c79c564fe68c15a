import { computeChiSquareTail } from '../distributions/chi-square.ts';
import { InvalidInputError, UndefinedStatisticError } from '../errors.ts';
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

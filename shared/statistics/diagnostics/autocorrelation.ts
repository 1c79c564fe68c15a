import { computeChiSquareTail } from '../distributions/chi-square.ts';
import { InvalidInputError, TooFewRowsError, UndefinedStatisticError } from '../errors.ts';
import type { ChiSquareTest } from './breusch-pagan.ts';

/** Autocorrelations at lags 1 … `lags` about the mean, divisor n (Box & Jenkins). Checked against R's acf. */
export function computeAutocorrelations(values: ArrayLike<number>, lags: number): Float64Array {
  const length = values.length;
  if (!Number.isInteger(lags) || lags < 1) throw new InvalidInputError('lags must be a whole number from 1 on');
  if (length <= lags) throw new TooFewRowsError(length, lags + 1);
  let sum = 0;
  for (let i = 0; i < length; i++) sum += values[i]!;
  const mean = sum / length;
  let squares = 0;
  for (let i = 0; i < length; i++) squares += (values[i]! - mean) ** 2;
  if (squares === 0) throw new UndefinedStatisticError('a constant series has no autocorrelation');
  return Float64Array.from({ length: lags }, (_, l) => {
    let products = 0;
    for (let i = l + 1; i < length; i++) products += (values[i]! - mean) * (values[i - l - 1]! - mean);
    return products / squares;
  });
}

/**
 * n·(n + 2)·Σ r² / (n − l) over lags 1 … `lags` against χ²(lags − `fittedParameters`) (Ljung & Box 1978). Checked against R's Box.test.
 */
export function testLjungBox(values: ArrayLike<number>, lags: number, fittedParameters = 0): ChiSquareTest {
  const degrees = lags - fittedParameters;
  if (!(degrees > 0)) throw new InvalidInputError('more lags than fitted parameters are needed');
  const length = values.length;
  const statistic =
    length *
    (length + 2) *
    computeAutocorrelations(values, lags).reduce((sum, r, l) => sum + (r * r) / (length - l - 1), 0);
  return { statistic, degrees, p: computeChiSquareTail(statistic, degrees) };
}

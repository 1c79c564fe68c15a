import { UndefinedStatisticError } from '../errors.ts';
import { checkPairs } from './pairs.ts';

function sumActual(actual: ArrayLike<number>): number {
  let sum = 0;
  for (let i = 0; i < actual.length; i++) sum += actual[i]!;
  if (!(sum > 0)) throw new UndefinedStatisticError('without sales there is nothing to relate the error to');
  return sum;
}

/** WAPE = Σ|y − f| / Σy, a fraction. Throws UndefinedStatisticError unless Σy > 0. */
export function computeWape(actual: ArrayLike<number>, forecast: ArrayLike<number>): number {
  const count = checkPairs({ actual, forecast });
  let sum = 0;
  for (let i = 0; i < count; i++) sum += Math.abs(actual[i]! - forecast[i]!);
  return sum / sumActual(actual);
}

/** Bias = Σ(f − y) / Σy, a fraction; positive when forecasts are too high. Throws UndefinedStatisticError unless Σy > 0. */
export function computeBias(actual: ArrayLike<number>, forecast: ArrayLike<number>): number {
  const count = checkPairs({ actual, forecast });
  let sum = 0;
  for (let i = 0; i < count; i++) sum += forecast[i]! - actual[i]!;
  return sum / sumActual(actual);
}

import { InvalidInputError } from '../errors.ts';
import { checkPairs } from './pairs.ts';

function checkOrder(lower: ArrayLike<number>, upper: ArrayLike<number>): void {
  for (let i = 0; i < lower.length; i++) {
    if (lower[i]! > upper[i]!) throw new InvalidInputError(`range ${i + 1} ends below its start`);
  }
}

/** Share of actuals inside [lower, upper], ends included. */
export function computeCoverage(actual: ArrayLike<number>, lower: ArrayLike<number>, upper: ArrayLike<number>): number {
  const count = checkPairs({ actual, lower, upper });
  checkOrder(lower, upper);
  let inside = 0;
  for (let i = 0; i < count; i++) if (actual[i]! >= lower[i]! && actual[i]! <= upper[i]!) inside++;
  return inside / count;
}

/**
 * Mean interval score at `level` (0.8, 0.95), in the units of the actuals, lower is better: width + 2/α · the distance by which an actual lies
 * outside, α = 1 − level (Gneiting & Raftery 2007).
 */
export function computeIntervalScore(
  actual: ArrayLike<number>,
  lower: ArrayLike<number>,
  upper: ArrayLike<number>,
  level: number,
): number {
  if (!(level > 0 && level < 1)) throw new InvalidInputError('the level of a range lies between 0 and 1');
  const count = checkPairs({ actual, lower, upper });
  checkOrder(lower, upper);
  const fine = 2 / (1 - level);
  let sum = 0;
  for (let i = 0; i < count; i++) {
    const outside = Math.max(0, lower[i]! - actual[i]!, actual[i]! - upper[i]!);
    sum += upper[i]! - lower[i]! + fine * outside;
  }
  return sum / count;
}

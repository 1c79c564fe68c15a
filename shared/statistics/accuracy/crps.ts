import { NonFiniteInputError } from '../errors.ts';
import { checkPairs } from './pairs.ts';

/**
 * Continuous ranked probability score of one actual against the empirical distribution of simulated values, in the units of the actual:
 * mean |x − y| − ½ · mean |x − x'| over all pairs (Gneiting & Raftery 2007, eq. 21). Sorting makes the pairs cost m·log m.
 */
export function computeSampleCrps(actual: number, sample: ArrayLike<number>): number {
  if (!Number.isFinite(actual)) throw new NonFiniteInputError('actual');
  const count = checkPairs({ sample });
  const sorted = Float64Array.from(sample).sort();
  let distance = 0;
  let spread = 0;
  for (let k = 0; k < count; k++) {
    distance += Math.abs(sorted[k]! - actual);
    spread += (2 * k + 1 - count) * sorted[k]!;
  }
  return distance / count - spread / (count * count);
}

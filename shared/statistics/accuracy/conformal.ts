import { InvalidInputError } from '../errors.ts';
import { checkPairs } from './pairs.ts';

/**
 * Rank ⌈(n + 1)·(1 − α)⌉ of the score that a split-conformal range reaches to; null if it exceeds n, when no finite range has the coverage
 * (Vovk, Gammerman & Shafer 2005; Lei et al. 2018).
 */
export function findConformalRank(scores: number, alpha: number): number | null {
  if (!Number.isInteger(scores) || scores < 0) throw new InvalidInputError('the number of scores is a whole number');
  if (!(alpha > 0 && alpha < 1)) throw new InvalidInputError('α lies between 0 and 1');
  // 1 − α in binary may lie a hair above the decimal meant; a whole product must not be lifted to the next rank by it.
  const rank = Math.ceil((scores + 1) * (1 - alpha) - 1e-9);
  return rank > scores ? null : rank;
}

/** The score at that rank, or null where there are too few. scores: non-conformity, larger is stranger, any order. */
export function findConformalQuantile(scores: ArrayLike<number>, alpha: number): number | null {
  if (scores.length === 0) return null;
  checkPairs({ scores });
  const rank = findConformalRank(scores.length, alpha);
  return rank === null ? null : Float64Array.from(scores).sort()[rank - 1]!;
}

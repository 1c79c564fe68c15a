import { InvalidInputError, NonFiniteInputError } from '../errors.ts';

/**
 * Logarithmic mean L(a, b) = (a − b) / ln(a / b) of a, b ≥ 0, L(a, a) = a and 0 if either is 0, its limits. Accurate for a ≈ b.
 */
export function computeLogarithmicMean(a: number, b: number): number {
  if (!Number.isFinite(a) || !Number.isFinite(b)) throw new NonFiniteInputError('an end of the logarithmic mean');
  if (a < 0 || b < 0) throw new InvalidInputError('the logarithmic mean is defined from 0 up');
  if (a === 0 || b === 0) return 0;
  if (a === b) return a;
  if (a > 2 * b || b > 2 * a) return (a - b) / (Math.log(a) - Math.log(b));
  // (a − b) / ln(a / b) = b·δ / ln(1 + δ), δ = (a − b) / b.
  const relative = (a - b) / b;
  return (b * relative) / Math.log1p(relative);
}

/**
 * Shares out to − from over the factors whose product is to / from, by the logarithmic mean (LMDI-I, Ang 2004): L(to, from)·ln(factor), exact, without
 * residual and independent of order. logFactors: ln of each factor. Returns one part per factor, in the units of `from` and `to`, both > 0.
 * Throws InvalidInputError if the factors don't multiply up to to / from (relative 1e-9).
 */
export function shareByLogarithmicMean(from: number, to: number, logFactors: readonly number[]): number[] {
  if (!(from > 0 && to > 0)) throw new InvalidInputError('both ends must be positive');
  const sum = logFactors.reduce((total, value) => total + value, 0);
  if (!Number.isFinite(sum)) throw new NonFiniteInputError('a factor');
  const size = logFactors.reduce((total, value) => total + Math.abs(value), 0);
  if (Math.abs(sum - Math.log(to / from)) > 1e-9 * Math.max(1, size)) {
    throw new InvalidInputError('the factors do not multiply up to the change');
  }
  const mean = computeLogarithmicMean(to, from);
  return logFactors.map((value) => mean * value);
}

import { InvalidInputError } from '../errors.ts';

/** Mean number of weeks in a Gregorian year, near enough: 365.25 / 7. */
export const weeksPerYear = 365.25 / 7;

/** sin(2πkt/m), cos(2πkt/m) for k = 1 … pairs, in the order sin1, cos1, sin2, cos2, …; t in the units of the period m. */
export function computeFourierTerms(t: number, pairs: number, period: number = weeksPerYear): number[] {
  if (!(period > 0) || !Number.isInteger(pairs) || pairs < 0) {
    throw new InvalidInputError('a period is positive and the number of pairs whole');
  }
  return Array.from({ length: pairs }, (_, k) => {
    const angle = (2 * Math.PI * (k + 1) * t) / period;
    return [Math.sin(angle), Math.cos(angle)];
  }).flat();
}

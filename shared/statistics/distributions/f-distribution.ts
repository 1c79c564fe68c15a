import { InvalidInputError } from '../errors.ts';
import { computeIncompleteBeta } from './incomplete-beta.ts';

/** P(F(numerator, denominator degrees) > value). Source: Abramowitz & Stegun 26.6.2. Checked against R's pf. */
export function computeFTail(value: number, numerator: number, denominator: number): number {
  if (!(numerator > 0) || !(denominator > 0) || !(value >= 0)) {
    throw new InvalidInputError('F needs a value ≥ 0 and degrees of freedom > 0');
  }
  const product = numerator * value;
  const whole = denominator + product;
  return computeIncompleteBeta(denominator / whole, product / whole, denominator / 2, numerator / 2);
}

import { NoConvergenceError } from '../errors.ts';
import { computeLogGap, computeStirlingRemainder } from './stirling.ts';

/** x^a·y^b / B(a, b), y = 1 − x, in a form that keeps its digits for large a and b. */
function computePrefix(x: number, y: number, a: number, b: number): number {
  const sum = a + b;
  const gap = x * b - y * a;
  const exponent =
    -a * computeLogGap(gap / a, (x / a) * sum) -
    b * computeLogGap(-gap / b, (y / b) * sum) +
    computeStirlingRemainder(sum) -
    computeStirlingRemainder(a) -
    computeStirlingRemainder(b);
  return Math.sqrt((a / sum) * (b / (2 * Math.PI))) * Math.exp(exponent);
}

/** The continued fraction DLMF 8.17.22 by the modified Lentz method. */
function computeFraction(x: number, a: number, b: number): number {
  const tiny = 1e-300;
  let c = 1;
  let d = 1 - ((a + b) * x) / (a + 1);
  d = 1 / (Math.abs(d) < tiny ? tiny : d);
  let value = d;
  for (let m = 1; m <= 100_000; m++) {
    let factor = (m * (b - m) * x) / ((a + 2 * m - 1) * (a + 2 * m));
    d = 1 + factor * d;
    c = 1 + factor / c;
    d = 1 / (Math.abs(d) < tiny ? tiny : d);
    if (Math.abs(c) < tiny) c = tiny;
    value *= d * c;
    factor = (-(a + m) * (a + b + m) * x) / ((a + 2 * m) * (a + 2 * m + 1));
    d = 1 + factor * d;
    c = 1 + factor / c;
    d = 1 / (Math.abs(d) < tiny ? tiny : d);
    if (Math.abs(c) < tiny) c = tiny;
    const step = d * c;
    value *= step;
    if (Math.abs(step - 1) < 1e-16) return value;
  }
  throw new NoConvergenceError('the incomplete beta function did not settle');
}

/**
 * Regularised incomplete beta function Iₓ(a, b), a, b > 0. `y` is 1 − x, given apart so that x near 1 keeps its digits.
 * Source: DLMF 8.17.22 and 8.17.4. Checked against R's pbeta, pt and pf.
 */
export function computeIncompleteBeta(x: number, y: number, a: number, b: number): number {
  if (x <= 0) return 0;
  if (y <= 0) return 1;
  if (x <= (a + 1) / (a + b + 2)) return (computePrefix(x, y, a, b) / a) * computeFraction(x, a, b);
  return 1 - (computePrefix(y, x, b, a) / b) * computeFraction(y, b, a);
}

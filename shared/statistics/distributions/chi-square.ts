import { InvalidInputError, NoConvergenceError } from '../errors.ts';
import { computeLogGap, computeStirlingRemainder } from './stirling.ts';

/** x^a·e^(−x) / Γ(a). */
function computePrefix(x: number, a: number): number {
  return Math.sqrt(a / (2 * Math.PI)) * Math.exp(-a * computeLogGap((x - a) / a, x / a) - computeStirlingRemainder(a));
}

/**
 * Upper regularised incomplete gamma function Q(a, x), a > 0, x ≥ 0: series DLMF 8.11.4 below a + 1, continued fraction DLMF 8.9.2
 * (modified Lentz) above.
 */
export function computeUpperGamma(a: number, x: number): number {
  if (x <= 0) return 1;
  if (x < a + 1) {
    let term = 1 / a;
    let sum = term;
    for (let k = 1; k < 100_000; k++) {
      term *= x / (a + k);
      sum += term;
      if (term < sum * 1e-17) return 1 - sum * computePrefix(x, a);
    }
    throw new NoConvergenceError('the incomplete gamma function did not settle');
  }
  const tiny = 1e-300;
  let b = x + 1 - a;
  let c = 1 / tiny;
  let d = 1 / b;
  let value = d;
  for (let k = 1; k < 100_000; k++) {
    const factor = -k * (k - a);
    b += 2;
    d = factor * d + b;
    c = b + factor / c;
    if (Math.abs(d) < tiny) d = tiny;
    if (Math.abs(c) < tiny) c = tiny;
    d = 1 / d;
    const step = d * c;
    value *= step;
    if (Math.abs(step - 1) < 1e-16) return computePrefix(x, a) * value;
  }
  throw new NoConvergenceError('the incomplete gamma function did not settle');
}

/** P(χ²(degrees) > value). Checked against R's pchisq. */
export function computeChiSquareTail(value: number, degrees: number): number {
  if (!(degrees > 0) || !(value >= 0)) throw new InvalidInputError('χ² needs a value ≥ 0 and degrees of freedom > 0');
  return computeUpperGamma(degrees / 2, value / 2);
}

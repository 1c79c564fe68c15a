import { InvalidInputError } from '../errors.ts';
import { computeIncompleteBeta } from './incomplete-beta.ts';
import { computeNormalQuantile } from './normal.ts';
import { computeStirlingRemainder } from './stirling.ts';

function checkDegrees(degrees: number): void {
  if (!(degrees > 0) || !Number.isFinite(degrees))
    throw new InvalidInputError('Student’s t needs degrees of freedom > 0');
}

/** P(|T| > |t|) with `degrees` (> 0, need not be whole) degrees of freedom. Source: Abramowitz & Stegun 26.7.1. Checked against R's pt. */
export function computeStudentTwoSided(t: number, degrees: number): number {
  checkDegrees(degrees);
  if (Number.isNaN(t)) throw new InvalidInputError('Student’s t of NaN');
  if (!Number.isFinite(t)) return 0;
  const square = t * t;
  const whole = degrees + square;
  return computeIncompleteBeta(degrees / whole, square / whole, degrees / 2, 0.5);
}

function computeDensity(t: number, degrees: number): number {
  // Γ((n+1)/2) / (Γ(n/2)·√(nπ)) by Stirling's series: its leading terms, divided out, leave e^(−½)·(1 + 1/n)^(n/2) / √(2π).
  const half = degrees / 2;
  const constant =
    Math.exp(
      half * Math.log1p(1 / degrees) - 0.5 + computeStirlingRemainder(half + 0.5) - computeStirlingRemainder(half),
    ) / Math.sqrt(2 * Math.PI);
  return constant * Math.exp(-(half + 0.5) * Math.log1p((t * t) / degrees));
}

/**
 * t with P(T ≤ t) = probability, 0 < probability < 1.
 * Start: the Cornish–Fisher expansion (Abramowitz & Stegun 26.7.5), exact forms for 1 and 2 degrees; then Newton steps on the logarithm
 * of the tail, held inside a bracket. Checked against R's qt.
 */
export function computeStudentQuantile(probability: number, degrees: number): number {
  checkDegrees(degrees);
  if (!(probability > 0 && probability < 1))
    throw new InvalidInputError('a quantile needs a probability between 0 and 1');
  if (probability === 0.5) return 0;
  const tail = Math.min(probability, 1 - probability);
  const sign = probability < 0.5 ? -1 : 1;
  if (degrees === 1) return sign / Math.tan(Math.PI * tail);
  if (degrees === 2) return (sign * (1 - 2 * tail)) / Math.sqrt(2 * tail * (1 - tail));
  const z = -computeNormalQuantile(tail);
  const square = z * z;
  const start =
    z +
    (z * (square + 1)) / (4 * degrees) +
    (z * ((5 * square + 16) * square + 3)) / (96 * degrees ** 2) +
    (z * (((3 * square + 19) * square + 17) * square - 15)) / (384 * degrees ** 3);
  let low = 0;
  let high = Infinity;
  let t = Number.isFinite(start) && start > 0 ? start : 1;
  for (let round = 0; round < 200; round++) {
    const at = computeStudentTwoSided(t, degrees) / 2;
    if (at > tail) low = t;
    else high = t;
    const step = (Math.log(at / tail) * at) / computeDensity(t, degrees);
    let next = t + step;
    if (!(next > low && next < high)) next = Number.isFinite(high) ? (low + high) / 2 : 2 * t;
    if (Math.abs(next - t) <= 4e-16 * Math.abs(next)) {
      t = next;
      break;
    }
    t = next;
  }
  return sign * t;
}

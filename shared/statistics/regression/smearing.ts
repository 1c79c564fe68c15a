import { InvalidInputError, NonFiniteInputError } from '../errors.ts';

function checkResiduals(residuals: ArrayLike<number>): void {
  if (residuals.length === 0) throw new InvalidInputError('a smearing factor needs residuals');
  for (let i = 0; i < residuals.length; i++) {
    if (!Number.isFinite(residuals[i])) throw new NonFiniteInputError(`residual ${i + 1}`);
  }
}

/**
 * Duan's (1983) smearing factor: (weighted) mean of exp(residual), which turns exp(fitted ln y), a median, into a mean. residuals: ln units.
 * Checked against R on the orange-juice panel (1.27428).
 */
export function computeSmearingFactor(residuals: ArrayLike<number>, weights?: ArrayLike<number>): number {
  checkResiduals(residuals);
  if (weights && weights.length !== residuals.length) throw new InvalidInputError('as many weights as residuals');
  let sum = 0;
  let weightSum = 0;
  for (let i = 0; i < residuals.length; i++) {
    const weight = weights?.[i] ?? 1;
    sum += weight * Math.exp(residuals[i]!);
    weightSum += weight;
  }
  if (!(weightSum > 0)) throw new InvalidInputError('the weights of a smearing factor must sum to more than 0');
  return sum / weightSum;
}

/** exp(½σ²), the factor if the residuals were normal; for comparison with Duan's. */
export function computeLognormalFactor(sigma: number): number {
  if (!Number.isFinite(sigma)) throw new NonFiniteInputError('sigma');
  return Math.exp((sigma * sigma) / 2);
}

import { InvalidInputError, SingularMatrixError } from '../errors.ts';
import { factorCholesky } from '../matrix/cholesky.ts';
import { solveUpperTransposed } from '../matrix/triangular.ts';

/**
 * Kullback–Leibler divergence KL(P‖Q) in nats of the normal P(mean, sd) from the normal Q: ln(σ_Q/σ_P) + (σ_P² + (μ_P − μ_Q)²) / (2σ_Q²) − ½
 * (Kullback & Leibler 1951). Standard deviations must be positive.
 */
export function computeGaussianDivergence(
  p: { mean: number; deviation: number },
  q: { mean: number; deviation: number },
): number {
  if (!(p.deviation > 0 && q.deviation > 0)) throw new InvalidInputError('standard deviations must be positive');
  const ratio = p.deviation / q.deviation;
  const gap = (p.mean - q.mean) / q.deviation;
  // ½·(r² − 1 − ln r²) + ½·gap², by log1p so that nearly equal normals keep their digits.
  const change = (ratio - 1) * (ratio + 1);
  return Math.max(0, 0.5 * (change - Math.log1p(change)) + 0.5 * gap * gap);
}

/**
 * Mean KL(P‖Q) over rows of two regressions' conditional normals: meansP and meansQ are their fitted values on the same rows, with one residual
 * standard deviation each.
 */
export function computeMeanConditionalDivergence(
  meansP: ArrayLike<number>,
  deviationP: number,
  meansQ: ArrayLike<number>,
  deviationQ: number,
): number {
  if (meansP.length !== meansQ.length || meansP.length === 0) {
    throw new InvalidInputError('as many fitted values of one fit as of the other, at least one');
  }
  let sum = 0;
  for (let i = 0; i < meansP.length; i++) {
    sum += computeGaussianDivergence(
      { mean: meansP[i]!, deviation: deviationP },
      { mean: meansQ[i]!, deviation: deviationQ },
    );
  }
  return sum / meansP.length;
}

/**
 * KL(P‖Q) in nats of two multivariate normals: ½·[tr(Σ_Q⁻¹Σ_P) + (μ_Q − μ_P)ᵀΣ_Q⁻¹(μ_Q − μ_P) − k + ln(|Σ_Q| / |Σ_P|)]. Covariances k × k,
 * row-major, symmetric. Throws SingularMatrixError if one is not positive definite.
 */
export function computeMultivariateGaussianDivergence(
  p: { mean: Float64Array; covariance: Float64Array },
  q: { mean: Float64Array; covariance: Float64Array },
): number {
  const size = p.mean.length;
  if (q.mean.length !== size || p.covariance.length !== size * size || q.covariance.length !== size * size) {
    throw new InvalidInputError('means and covariances of one size are needed');
  }
  const upperP = factorCholesky(p.covariance, size, 1e-14);
  const upperQ = factorCholesky(q.covariance, size, 1e-14);
  if (!upperP || !upperQ) throw new SingularMatrixError('a covariance is not positive definite');
  let trace = 0;
  let logRatio = 0;
  for (let k = 0; k < size; k++) {
    // Row k of U_P, so that Σ over k of |U_Q⁻ᵀ·u_k|² is the trace of Σ_Q⁻¹·U_PᵀU_P.
    const solved = solveUpperTransposed(upperQ, size, upperP.subarray(k * size, (k + 1) * size));
    for (const value of solved) trace += value * value;
    logRatio += 2 * Math.log(upperQ[k * size + k]! / upperP[k * size + k]!);
  }
  const gap = solveUpperTransposed(
    upperQ,
    size,
    p.mean.map((value, k) => value - q.mean[k]!),
  );
  let distance = 0;
  for (const value of gap) distance += value * value;
  return Math.max(0, 0.5 * (trace + distance - size + logRatio));
}

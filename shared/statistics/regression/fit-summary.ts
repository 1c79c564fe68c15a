import { computeFTail } from '../distributions/f-distribution.ts';
import { UndefinedStatisticError } from '../errors.ts';
import { computeResidualDegrees, type CovarianceFit } from './covariance.ts';
import { countWeightedRows } from './input-check.ts';
import type { LeastSquaresInput } from './types.ts';

export interface FitSummary {
  /** Rows of positive weight. */
  rows: number;
  /** Coefficients; with penalties the trace of the hat matrix. */
  parameters: number;
  residualDegrees: number;
  sigma: number;
  /** 1 − RSS / TSS, TSS about the (weighted) mean with an intercept, about 0 without one. */
  rSquared: number;
  adjustedRSquared: number;
  /** F of all columns but the intercept, with its degrees of freedom and p; null where there is nothing to test or RSS is 0. */
  overallF: { value: number; numerator: number; denominator: number; p: number } | null;
  logLikelihood: number;
  /** −2·logL + 2·(k + 1), the variance counted as a parameter: R's AIC. */
  aic: number;
  /** AIC + 2·K·(K + 1) / (n − K − 1), K = k + 1 (Hurvich & Tsai 1989); null if n ≤ K + 1. */
  aicc: number | null;
  /** −2·logL + ln(n)·(k + 1): R's BIC. */
  bic: number;
}

/**
 * Size and fit of a regression. Normal log-likelihood ½·[Σ ln w − n·(ln 2π + 1 − ln n + ln RSS)] over rows of positive weight, as R's logLik.
 * Throws UndefinedStatisticError if the response is constant or the residuals are all 0. Checked against R's summary.lm, AIC and BIC.
 */
export function summariseFit(input: LeastSquaresInput, fit: CovarianceFit, hasIntercept: boolean): FitSummary {
  const { response, weights } = input;
  const rows = countWeightedRows(input);
  const residualDegrees = computeResidualDegrees(input, fit);
  const parameters = rows - residualDegrees;
  const rss = fit.residualSumOfSquares;
  let weightSum = 0;
  let weightedSum = 0;
  let logWeights = 0;
  for (let i = 0; i < input.rows; i++) {
    const weight = weights?.[i] ?? 1;
    if (weight === 0) continue;
    weightSum += weight;
    weightedSum += weight * response[i]!;
    logWeights += Math.log(weight);
  }
  const mean = hasIntercept ? weightedSum / weightSum : 0;
  let total = 0;
  for (let i = 0; i < input.rows; i++) total += (weights?.[i] ?? 1) * (response[i]! - mean) ** 2;
  if (total === 0) throw new UndefinedStatisticError('a constant response has no R²');
  if (rss === 0) throw new UndefinedStatisticError('without residuals the likelihood is infinite');
  const intercepts = hasIntercept ? 1 : 0;
  const rSquared = 1 - rss / total;
  const numerator = parameters - intercepts;
  const value = (total - rss) / numerator / (rss / residualDegrees);
  const logLikelihood = 0.5 * (logWeights - rows * (Math.log(2 * Math.PI) + 1 - Math.log(rows) + Math.log(rss)));
  const counted = parameters + 1;
  const aic = -2 * logLikelihood + 2 * counted;
  const spare = rows - counted - 1;
  return {
    rows,
    parameters,
    residualDegrees,
    sigma: Math.sqrt(rss / residualDegrees),
    rSquared,
    adjustedRSquared: 1 - (1 - rSquared) * ((rows - intercepts) / residualDegrees),
    overallF:
      numerator > 1e-9
        ? {
            value,
            numerator,
            denominator: residualDegrees,
            p: computeFTail(Math.max(0, value), numerator, residualDegrees),
          }
        : null,
    logLikelihood,
    aic,
    aicc: spare > 0 ? aic + (2 * counted * (counted + 1)) / spare : null,
    bic: -2 * logLikelihood + Math.log(rows) * counted,
  };
}

import { computeStudentQuantile, computeStudentTwoSided } from '../distributions/student-t.ts';
import { InvalidInputError } from '../errors.ts';
import { computeStandardErrors } from './covariance.ts';
import type { LeastSquaresFit } from './types.ts';

export interface CoefficientRow {
  /** Index of the column in the design. */
  column: number;
  estimate: number;
  standardError: number;
  /** Null where the standard error is 0. */
  tStatistic: number | null;
  /** P(|T| > |t|), null where the standard error is 0. */
  twoSidedP: number | null;
  lower: number;
  upper: number;
}

/**
 * Estimate, standard error, t, two-sided p and the interval at `level` (0.95 if missing) of each kept coefficient, from any covariance in the
 * order of `kept`; Student's t with `degrees` degrees of freedom. Checked against R's summary.lm and confint.
 */
export function buildCoefficientTable(
  fit: Pick<LeastSquaresFit, 'coefficients' | 'kept' | 'rank'>,
  covariance: Float64Array,
  degrees: number,
  level = 0.95,
): CoefficientRow[] {
  if (!(level > 0 && level < 1)) throw new InvalidInputError('the level of an interval lies between 0 and 1');
  const errors = computeStandardErrors(covariance, fit.rank);
  const reach = computeStudentQuantile(1 - (1 - level) / 2, degrees);
  return fit.kept.map((column, k) => {
    const estimate = fit.coefficients[column]!;
    const standardError = errors[k]!;
    const tStatistic = standardError > 0 ? estimate / standardError : null;
    return {
      column,
      estimate,
      standardError,
      tStatistic,
      twoSidedP: tStatistic === null ? null : computeStudentTwoSided(tStatistic, degrees),
      lower: estimate - reach * standardError,
      upper: estimate + reach * standardError,
    };
  });
}

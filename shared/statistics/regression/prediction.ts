import { computeStudentQuantile } from '../distributions/student-t.ts';
import { InvalidInputError } from '../errors.ts';
import type { LeastSquaresFit } from './types.ts';

export interface Prediction {
  mean: number;
  /** Standard error of the mean, √(x'Vx). */
  meanError: number;
  /** Standard error of one new observation, √(x'Vx + σ²). */
  observationError: number;
}

/**
 * x'b for one new row of the design (all columns; dropped ones are passed over), with the standard errors that follow from a covariance in the order
 * of `kept` and the residual σ. Checked against R's predict.lm.
 */
export function predictRow(
  fit: Pick<LeastSquaresFit, 'coefficients' | 'kept' | 'rank'>,
  covariance: Float64Array,
  sigma: number,
  row: ArrayLike<number>,
): Prediction {
  if (row.length !== fit.coefficients.length) {
    throw new InvalidInputError(`a row of ${row.length} values for ${fit.coefficients.length} columns`);
  }
  const { rank, kept } = fit;
  let mean = 0;
  let variance = 0;
  for (let a = 0; a < rank; a++) {
    mean += row[kept[a]!]! * fit.coefficients[kept[a]!]!;
    for (let b = 0; b < rank; b++) variance += row[kept[a]!]! * covariance[a * rank + b]! * row[kept[b]!]!;
  }
  const meanError = Math.sqrt(Math.max(0, variance));
  return { mean, meanError, observationError: Math.hypot(meanError, sigma) };
}

/** The interval at `level` for one new observation: mean ± t·observationError. */
export function computePredictionInterval(
  prediction: Prediction,
  degrees: number,
  level: number,
): { lower: number; upper: number } {
  const reach = computeStudentQuantile(1 - (1 - level) / 2, degrees) * prediction.observationError;
  return { lower: prediction.mean - reach, upper: prediction.mean + reach };
}

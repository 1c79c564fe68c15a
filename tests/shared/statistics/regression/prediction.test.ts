import { describe, expect, it } from 'vitest';
import { InvalidInputError } from '../../../../shared/statistics/errors.ts';
import { computePredictionInterval, predictRow } from '../../../../shared/statistics/regression/prediction.ts';

/** The error of a plain sum: a row of ones over terms with the given covariance. */
function computeSumError(covariance: Float64Array, terms: number): number {
  const indices = Array.from({ length: terms }, (_, k) => k);
  const fit = { coefficients: indices.map(() => 0), kept: indices, rank: terms };
  return predictRow(
    fit,
    covariance,
    0,
    indices.map(() => 1),
  ).meanError;
}

describe('prediction', () => {
  it('adds up correlated errors', () => {
    // Σ = [16, 8, 4; 8, 25, 10; 4, 10, 9]: sd of the sum 9.6954, 7.0711 if independent, recomputed.
    expect(computeSumError(Float64Array.of(16, 8, 4, 8, 25, 10, 4, 10, 9), 3)).toBeCloseTo(9.6954, 4);
    expect(computeSumError(Float64Array.of(16, 0, 0, 0, 25, 0, 0, 0, 9), 3)).toBeCloseTo(7.0711, 4);
  });

  it('inflates a sum over 13 weeks whose errors follow each other', () => {
    // AR(1), ρ = 0.5, h = 13: × 1.6408 against independent weeks, recomputed.
    const covariance = Float64Array.from({ length: 169 }, (_, k) => 0.5 ** Math.abs(Math.floor(k / 13) - (k % 13)));
    expect(computeSumError(covariance, 13) / Math.sqrt(13)).toBeCloseTo(1.6408, 4);
  });

  it('passes over dropped columns', () => {
    const fit = { coefficients: [1, null, 3], kept: [0, 2], rank: 2 };
    const prediction = predictRow(fit, Float64Array.of(4, 1, 1, 9), 5, [1, 100, 2]);
    // By hand: 1 + 6; variance 4 + 2·2 + 36 = 44; with σ² = 25: 69.
    expect(prediction.mean).toBe(7);
    expect(prediction.meanError).toBeCloseTo(Math.sqrt(44), 14);
    expect(prediction.observationError).toBeCloseTo(Math.sqrt(69), 14);
    const range = computePredictionInterval(prediction, 1, 0.5);
    // The quartile of t with 1 degree of freedom is 1.
    expect(range.upper - prediction.mean).toBeCloseTo(Math.sqrt(69), 12);
    expect(prediction.mean - range.lower).toBeCloseTo(Math.sqrt(69), 12);
  });

  it('refuses a row of another length', () => {
    const fit = { coefficients: [1], kept: [0], rank: 1 };
    expect(() => predictRow(fit, Float64Array.of(1), 1, [1, 2])).toThrow(InvalidInputError);
  });
});

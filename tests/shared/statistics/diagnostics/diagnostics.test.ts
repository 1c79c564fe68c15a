import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { computeAutocorrelations, testLjungBox } from '../../../../shared/statistics/diagnostics/autocorrelation.ts';
import { testBreuschPagan } from '../../../../shared/statistics/diagnostics/breusch-pagan.ts';
import { analyseCondition, computeVarianceInflation } from '../../../../shared/statistics/diagnostics/collinearity.ts';
import {
  computeDurbinWatson,
  computeDurbinWatsonBySeries,
} from '../../../../shared/statistics/diagnostics/durbin-watson.ts';
import {
  computeGaussianDivergence,
  computeMeanConditionalDivergence,
  computeMultivariateGaussianDivergence,
} from '../../../../shared/statistics/diagnostics/gaussian-divergence.ts';
import {
  InvalidInputError,
  SingularMatrixError,
  TooFewRowsError,
  UndefinedStatisticError,
} from '../../../../shared/statistics/errors.ts';
import { fitLeastSquares } from '../../../../shared/statistics/regression/least-squares.ts';
import { buildInput, buildOnes } from '../../../reference/build-designs.ts';

describe('Durbin–Watson', () => {
  it('is computed by hand', () => {
    // e = 1, −1, 2: (4 + 9) / (1 + 1 + 4).
    expect(computeDurbinWatson([1, -1, 2])).toBeCloseTo(13 / 6, 14);
  });

  it('never differences across series, and passes over a missing week', () => {
    const series = ['a', 'a', 'a', 'b', 'b'];
    const residuals = [1, -1, 2, 3, 1];
    // Ignoring the gap: (4 + 9 + 4) / 16. Respecting it (a has no week 3): pairs (1, 2) and (7, 8) of three neighbours: (4 + 4)·3/2 / 16.
    expect(computeDurbinWatsonBySeries(residuals, series, [1, 2, 4, 7, 8], 'ignore')).toBeCloseTo(17 / 16, 14);
    expect(computeDurbinWatsonBySeries(residuals, series, [1, 2, 4, 7, 8])).toBeCloseTo(12 / 16, 14);
  });

  it('equals the plain statistic on one series without gaps', () => {
    fc.assert(
      fc.property(
        fc.array(fc.double({ min: 1, max: 9, noNaN: true }), { minLength: 2, maxLength: 40 }),
        (residuals) => {
          const periods = residuals.map((_, i) => i);
          const series = residuals.map(() => 'a');
          expect(computeDurbinWatsonBySeries(residuals, series, periods)).toBeCloseTo(
            computeDurbinWatson(residuals),
            12,
          );
        },
      ),
    );
  });

  it('refuses unsorted weeks and residuals of 0', () => {
    expect(() => computeDurbinWatsonBySeries([1, 2], ['a', 'a'], [2, 1])).toThrow(InvalidInputError);
    expect(() => computeDurbinWatson([0, 0])).toThrow(UndefinedStatisticError);
    expect(() => computeDurbinWatsonBySeries([1, 2], ['a', 'b'], [1, 2])).toThrow(UndefinedStatisticError);
  });
});

describe('autocorrelation', () => {
  it('is computed by hand', () => {
    // 1, 2, 3, 4 about 2.5: (1.5·0.5 − 0.25 + 0.5·1.5) / 5.
    expect(computeAutocorrelations([1, 2, 3, 4], 1)[0]).toBeCloseTo(1.25 / 5, 14);
  });

  it('refuses constant and short series', () => {
    expect(() => computeAutocorrelations([1, 1, 1], 1)).toThrow(UndefinedStatisticError);
    expect(() => computeAutocorrelations([1, 2], 2)).toThrow(TooFewRowsError);
    expect(() => testLjungBox([1, 2, 3, 5], 1, 1)).toThrow(InvalidInputError);
  });
});

describe('collinearity', () => {
  it('is absent between orthogonal columns', () => {
    const input = buildInput(
      { '(Intercept)': buildOnes(4), a: [1, 1, -1, -1], b: [1, -1, 1, -1] },
      Float64Array.of(1, 2, 3, 5),
    );
    const fit = fitLeastSquares(input);
    expect(computeVarianceInflation(input, fit)).toEqual([null, expect.closeTo(1, 12), expect.closeTo(1, 12)]);
    for (const index of analyseCondition(fit).indices) expect(index).toBeCloseTo(1, 12);
  });

  it('shares each coefficient’s variance out to 1', () => {
    const input = buildInput(
      { '(Intercept)': buildOnes(6), a: [1, 2, 3, 4, 5, 7], b: [2, 4.1, 6, 8, 10.2, 14] },
      Float64Array.of(1, 2, 3, 5, 4, 6),
    );
    const { proportions } = analyseCondition(fitLeastSquares(input));
    for (let j = 0; j < 3; j++) expect(proportions.reduce((sum, row) => sum + row[j]!, 0)).toBeCloseTo(1, 12);
  });

  it('refuses a penalised fit', () => {
    const input = { ...buildInput({ x: [1, 2, 3] }, Float64Array.of(1, 2, 4)), penalties: Float64Array.of(1) };
    expect(() => computeVarianceInflation(input, fitLeastSquares(input))).toThrow(InvalidInputError);
  });
});

describe('Breusch–Pagan', () => {
  it('refuses a weighted design, one of an intercept alone, and residuals of 0', () => {
    const input = buildInput({ '(Intercept)': buildOnes(3), x: [1, 2, 3] }, Float64Array.of(1, 2, 4));
    const residuals = Float64Array.of(1, -2, 1);
    expect(() => testBreuschPagan({ ...input, weights: buildOnes(3) }, residuals, 'koenker')).toThrow(
      InvalidInputError,
    );
    expect(() => testBreuschPagan(input, new Float64Array(3), 'koenker')).toThrow(UndefinedStatisticError);
    const alone = buildInput({ '(Intercept)': buildOnes(3) }, Float64Array.of(1, 2, 4));
    expect(() => testBreuschPagan(alone, residuals, 'original')).toThrow(InvalidInputError);
  });
});

describe('divergence of Gaussians', () => {
  it('is computed by hand', () => {
    // N(0, 1) from N(1, 2): ln 2 + (1 + 1) / 8 − ½.
    expect(computeGaussianDivergence({ mean: 0, deviation: 1 }, { mean: 1, deviation: 2 })).toBeCloseTo(
      Math.LN2 + 0.25 - 0.5,
      14,
    );
    expect(computeMeanConditionalDivergence([0, 1], 1, [1, 2], 2)).toBeCloseTo(Math.LN2 - 0.25, 14);
  });

  it('is the integral of p·ln(p/q)', () => {
    const p = { mean: 0.3, deviation: 0.8 };
    const q = { mean: -0.5, deviation: 1.3 };
    const logDensity = (x: number, { mean, deviation }: typeof p): number =>
      -0.5 * ((x - mean) / deviation) ** 2 - Math.log(deviation * Math.sqrt(2 * Math.PI));
    let integral = 0;
    const step = 0.001;
    for (let x = -10; x <= 10; x += step) {
      integral += step * Math.exp(logDensity(x, p)) * (logDensity(x, p) - logDensity(x, q));
    }
    expect(computeGaussianDivergence(p, q)).toBeCloseTo(integral, 8);
  });

  it('is 0 from itself, never negative, and adds over independent coordinates', () => {
    const mean = fc.double({ min: -5, max: 5, noNaN: true });
    const deviation = fc.double({ min: 0.1, max: 5, noNaN: true });
    const gaussian = fc.record({ mean, deviation });
    fc.assert(
      fc.property(gaussian, gaussian, gaussian, gaussian, (p1, q1, p2, q2) => {
        expect(computeGaussianDivergence(p1, p1)).toBe(0);
        const sum = computeGaussianDivergence(p1, q1) + computeGaussianDivergence(p2, q2);
        expect(sum).toBeGreaterThanOrEqual(0);
        const join = (a: typeof p1, b: typeof p1): { mean: Float64Array; covariance: Float64Array } => ({
          mean: Float64Array.of(a.mean, b.mean),
          covariance: Float64Array.of(a.deviation ** 2, 0, 0, b.deviation ** 2),
        });
        const together = computeMultivariateGaussianDivergence(join(p1, p2), join(q1, q2));
        expect(Math.abs(together - sum)).toBeLessThanOrEqual(1e-9 * (1 + sum));
      }),
    );
  });

  it('does not change when both are turned by the same matrix', () => {
    // KL is invariant under x → Ax; A = [2 1; 1 3], covariances A·D·Aᵀ by hand.
    const turn = (d1: number, d2: number): Float64Array =>
      Float64Array.of(4 * d1 + d2, 2 * d1 + 3 * d2, 2 * d1 + 3 * d2, d1 + 9 * d2);
    const straight = computeMultivariateGaussianDivergence(
      { mean: Float64Array.of(1, 0), covariance: Float64Array.of(2, 0, 0, 3) },
      { mean: Float64Array.of(0, 1), covariance: Float64Array.of(1, 0, 0, 4) },
    );
    const turned = computeMultivariateGaussianDivergence(
      { mean: Float64Array.of(2, 1), covariance: turn(2, 3) },
      { mean: Float64Array.of(1, 3), covariance: turn(1, 4) },
    );
    expect(turned).toBeCloseTo(straight, 12);
  });

  it('refuses deviations of 0 and covariances that are not positive definite', () => {
    expect(() => computeGaussianDivergence({ mean: 0, deviation: 0 }, { mean: 0, deviation: 1 })).toThrow(
      InvalidInputError,
    );
    const flat = { mean: Float64Array.of(0, 0), covariance: Float64Array.of(1, 1, 1, 1) };
    expect(() => computeMultivariateGaussianDivergence(flat, flat)).toThrow(SingularMatrixError);
  });
});

import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { findConformalQuantile, findConformalRank } from '../../../../shared/statistics/accuracy/conformal.ts';
import { computeSampleCrps } from '../../../../shared/statistics/accuracy/crps.ts';
import { computeCoverage, computeIntervalScore } from '../../../../shared/statistics/accuracy/interval-accuracy.ts';
import { computeBias, computeWape } from '../../../../shared/statistics/accuracy/relative-error.ts';
import { computeMase, computeRmsse } from '../../../../shared/statistics/accuracy/scaled-error.ts';
import {
  computeTrackingSignal,
  computeTrackingSignals,
} from '../../../../shared/statistics/accuracy/tracking-signal.ts';
import { computeNormalCdf, computeNormalQuantile } from '../../../../shared/statistics/distributions/normal.ts';
import {
  InvalidInputError,
  NonFiniteInputError,
  UndefinedStatisticError,
} from '../../../../shared/statistics/errors.ts';

const units = fc.double({ min: 0, max: 1000, noNaN: true });

describe('relative and scaled errors', () => {
  it('give the published figures', () => {
    // Source: Hyndman & Koehler 2006 (MASE), M5 guide (RMSSE), recomputed.
    const training = [10, 12, 11, 13, 12, 14];
    const actual = [15, 13, 16];
    const forecast = [14, 14, 14];
    expect(computeMase(training, actual, forecast)).toBeCloseTo(0.83333, 5);
    expect(computeRmsse(training, actual, forecast)).toBeCloseTo(0.84515, 5);
    expect(computeWape(actual, forecast)).toBeCloseTo(0.090909, 6);
    expect(computeBias(actual, forecast)).toBeCloseTo(-0.045455, 6);
  });

  it('scale by the seasonal naive when asked', () => {
    // By hand: |11−10|, |13−12|, |12−11|, |14−13| at season 2: mean 1; errors 1, 1, 2: mean 4/3, squares 2.
    const training = [10, 12, 11, 13, 12, 14];
    expect(computeMase(training, [15, 13, 16], [14, 14, 14], 2)).toBeCloseTo(4 / 3, 14);
    expect(computeRmsse(training, [15, 13, 16], [14, 14, 14], 2)).toBeCloseTo(Math.SQRT2, 14);
  });

  it('hold |bias| at or below WAPE, with equality when all errors have one sign', () => {
    fc.assert(
      fc.property(fc.array(fc.tuple(units, units), { minLength: 1 }), (pairs) => {
        const actual = pairs.map(([y]) => y + 1);
        const forecast = pairs.map(([, f]) => f);
        expect(Math.abs(computeBias(actual, forecast))).toBeLessThanOrEqual(
          computeWape(actual, forecast) * (1 + 1e-12),
        );
        const above = pairs.map(([y, f]) => y + 1 + f);
        expect(computeBias(actual, above)).toBeCloseTo(computeWape(actual, above), 9);
      }),
    );
  });

  it('refuse what has no answer', () => {
    expect(() => computeWape([0, 0], [1, 2])).toThrow(UndefinedStatisticError);
    expect(() => computeBias([], [])).toThrow(InvalidInputError);
    expect(() => computeWape([1, NaN], [1, 2])).toThrow(NonFiniteInputError);
    expect(() => computeWape([1], [1, 2])).toThrow(InvalidInputError);
    expect(() => computeMase([5, 5, 5], [1], [1])).toThrow(UndefinedStatisticError);
    expect(() => computeMase([5], [1], [1])).toThrow(InvalidInputError);
  });
});

describe('ranges', () => {
  it('count both ends as inside', () => {
    expect(computeCoverage([1, 2, 3, 4], [1, 0, 0, 5], [9, 2, 2, 9])).toBe(0.5);
  });

  it('are scored as Gneiting & Raftery define', () => {
    // By hand, level 0.8 (2/α = 10): inside 8; 1 below: 8 + 10; 2 above: 8 + 20; mean 54 / 3.
    expect(computeIntervalScore([5, 0, 11], [1, 1, 1], [9, 9, 9], 0.8)).toBeCloseTo(18, 12);
  });

  it('score best at the quantiles of the truth', () => {
    // Property of a proper score: for a standard normal, ±z is better than any other symmetric range.
    const truth = Array.from({ length: 4000 }, (_, i) => computeNormalQuantile((i + 0.5) / 4000));
    const score = (reach: number): number =>
      computeIntervalScore(
        truth,
        truth.map(() => -reach),
        truth.map(() => reach),
        0.8,
      );
    const best = score(computeNormalQuantile(0.9));
    for (const reach of [0.8, 1.1, 1.5, 2]) expect(score(reach)).toBeGreaterThan(best);
  });

  it('refuse to end below their start', () => {
    expect(() => computeCoverage([1], [2], [1])).toThrow(InvalidInputError);
    expect(() => computeIntervalScore([1], [0], [2], 1)).toThrow(InvalidInputError);
  });
});

describe('CRPS of a sample', () => {
  it('equals the double sum of its definition', () => {
    fc.assert(
      fc.property(fc.array(units, { minLength: 1, maxLength: 40 }), units, (sample, actual) => {
        let distance = 0;
        let spread = 0;
        for (const a of sample) {
          distance += Math.abs(a - actual);
          for (const b of sample) spread += Math.abs(a - b);
        }
        const expected = distance / sample.length - spread / (2 * sample.length ** 2);
        expect(computeSampleCrps(actual, sample)).toBeCloseTo(expected, 9);
      }),
    );
  });

  it('approaches the closed form of a normal', () => {
    // Source: Gneiting & Raftery 2007, eq. 5: z·(2Φ(z) − 1) + 2φ(z) − 1/√π.
    const sample = Array.from({ length: 5000 }, (_, i) => computeNormalQuantile((i + 0.5) / 5000));
    for (const z of [-1.5, 0, 0.4, 2]) {
      const density = Math.exp((-z * z) / 2) / Math.sqrt(2 * Math.PI);
      const exact = z * (2 * computeNormalCdf(z) - 1) + 2 * density - 1 / Math.sqrt(Math.PI);
      expect(computeSampleCrps(z, sample)).toBeCloseTo(exact, 3);
    }
  });

  it('is the absolute error of a single point', () => {
    expect(computeSampleCrps(3, [7])).toBe(4);
  });
});

describe('tracking signal', () => {
  const forecast = [254, 329, 404, 354, 378, 454];

  it('runs 1 … 6 when every forecast is too high', () => {
    // Source: textbook data, sign convention Σ(f − y).
    const signals = computeTrackingSignals([204, 262, 320, 304, 330, 405], forecast);
    signals.forEach((signal, k) => expect(signal).toBeCloseTo(k + 1, 12));
  });

  it('follows the signs when they differ', () => {
    // By hand: f − y = −50, 67, −20, 50, −22, 49, running sum −50, 17, −3, 47, 25, 74, mean absolute 50, 58.5, 137/3, 46.75, 41.8, 43.
    const signals = computeTrackingSignals([304, 262, 424, 304, 400, 405], forecast);
    const byHand = [-50 / 50, 17 / 58.5, -3 / (137 / 3), 47 / 46.75, 25 / 41.8, 74 / 43];
    signals.forEach((signal, k) => expect(signal).toBeCloseTo(byHand[k]!, 12));
  });

  it('forgets what lies before its window and never exceeds its length', () => {
    expect(computeTrackingSignal([0, 0, 10, 10], [100, 100, 9, 9], 2)).toBeCloseTo(-2, 12);
    fc.assert(
      fc.property(fc.array(fc.tuple(units, units), { minLength: 1, maxLength: 30 }), (pairs) => {
        const signals = computeTrackingSignals(
          pairs.map(([y]) => y),
          pairs.map(([, f]) => f),
          13,
        );
        signals.forEach((signal, k) => {
          if (signal !== null) expect(Math.abs(signal)).toBeLessThanOrEqual(Math.min(13, k + 1) + 1e-9);
        });
      }),
    );
  });

  it('has no value before the first error', () => {
    expect(computeTrackingSignals([1, 2], [1, 3])).toEqual([null, 2]);
    expect(() => computeTrackingSignal([1], [1])).toThrow(UndefinedStatisticError);
  });
});

describe('split conformal', () => {
  it('has the published ranks', () => {
    // Source: Vovk et al., recomputed: n = 52, α = 0.1 → 48; 90 % needs n ≥ 9, 95 % n ≥ 19.
    expect(findConformalRank(52, 0.1)).toBe(48);
    expect(findConformalRank(8, 0.1)).toBeNull();
    expect(findConformalRank(9, 0.1)).toBe(9);
    expect(findConformalRank(18, 0.05)).toBeNull();
    expect(findConformalRank(19, 0.05)).toBe(19);
  });

  it('covers at least 1 − α of exchangeable scores', () => {
    // Over all n + 1 positions that a new score can take among n distinct ones, at least (n + 1)(1 − α) lie at or below the rank.
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 300 }), fc.double({ min: 0.01, max: 0.99, noNaN: true }), (n, alpha) => {
        const rank = findConformalRank(n, alpha);
        if (rank === null) expect(n / (n + 1)).toBeLessThan(1 - alpha + 1e-9);
        else {
          expect(rank / (n + 1)).toBeGreaterThanOrEqual(1 - alpha - 1e-9);
          expect((rank - 1) / (n + 1)).toBeLessThan(1 - alpha + 1e-9);
        }
      }),
    );
  });

  it('reads the score at the rank, whatever the order', () => {
    const scores = [9, 1, 8, 2, 7, 3, 6, 4, 5];
    expect(findConformalQuantile(scores, 0.1)).toBe(9);
    expect(findConformalQuantile(scores, 0.5)).toBe(5);
    expect(findConformalQuantile([], 0.5)).toBeNull();
    expect(findConformalQuantile([1], 0.05)).toBeNull();
  });

  it('refuses α outside 0 … 1', () => {
    expect(() => findConformalRank(5, 0)).toThrow(InvalidInputError);
    expect(() => findConformalRank(5, 1)).toThrow(InvalidInputError);
  });
});

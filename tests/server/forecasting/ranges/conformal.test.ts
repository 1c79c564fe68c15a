import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  conformalQuantile,
  scaleByConformal,
  stretchDeviation,
  type StandardisedError,
} from '../../../../server/forecasting/ranges/conformal.ts';
import { createNormal, createRandom } from '../../../../server/forecasting/ranges/random.ts';

const normal = { p2_5: -1.96, p10: -1.2816, p90: 1.2816, p97_5: 1.96 };

describe('conformal scaling', () => {
  it('takes the score of rank ⌈(n + 1)(1 − α)⌉ where weeks hardly differ in age', () => {
    // 49 weeks of one cell each, so close in time that their weights are equal to nine digits: (49 + 1)·0.8 = 40, (49 + 1)·0.95 = 47.5.
    const cases = Array.from({ length: 49 }, (_, week) => ({ score: week + 1, week: week / 1e10 }));
    expect(conformalQuantile(cases, 0.2)).toBe(40);
    expect(conformalQuantile(cases, 0.05)).toBe(48);
  });

  it('gives no factor where the rank reaches the last week', () => {
    const cases = Array.from({ length: 18 }, (_, week) => ({ score: week, week }));
    expect(conformalQuantile(cases, 0.05)).toBeNull();
    expect(conformalQuantile([], 0.2)).toBeNull();
  });

  it('counts the cells of one week as one case', () => {
    const cases = Array.from({ length: 300 }, (_, i) => ({ score: i, week: i % 3 }));
    expect(conformalQuantile(cases, 0.05)).toBeNull();
  });

  it('listens more to the latest weeks', () => {
    const calmLately = Array.from({ length: 60 }, (_, week) => ({ score: week < 30 ? 2 : 1, week }));
    const wildLately = calmLately.map(({ score, week }) => ({ score: 3 - score, week }));
    expect(conformalQuantile(calmLately, 0.5)).toBe(1);
    expect(conformalQuantile(wildLately, 0.5)).toBe(2);
  });

  it('widens ranges by the factor that the errors are too large by', () => {
    const draw = createNormal(createRandom(11));
    const errors = Array.from({ length: 4000 }, (_, i): StandardisedError => ({
      value: 1.5 * draw(),
      week: i / 1000,
      horizon: 1 + (i % 8),
      kind: (i % 2) as 0 | 1,
    }));
    const factors = scaleByConformal(errors, [normal, normal])(3, 1)!;
    expect(Math.abs(factors.inner - 1.5)).toBeLessThan(0.15);
    expect(Math.abs(factors.outer - 1.5)).toBeLessThan(0.2);
  });

  it('keeps the order of deviations whatever the factors', () => {
    const factor = fc.double({ min: 0.5, max: 3, noNaN: true });
    const deviation = fc.double({ min: -6, max: 6, noNaN: true });
    fc.assert(
      fc.property(factor, factor, deviation, deviation, (inner, outer, a, b) => {
        const [low, high] = [Math.min(a, b), Math.max(a, b)];
        const stretched = [low, high].map((value) => stretchDeviation(value, { inner, outer }, normal));
        expect(stretched[0]!).toBeLessThanOrEqual(stretched[1]! + 1e-12);
      }),
    );
  });
});

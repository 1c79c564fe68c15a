import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  computeLogarithmicMean,
  shareByLogarithmicMean,
} from '../../../../shared/statistics/decomposition/logarithmic-mean.ts';
import { splitPriceVolumeMix } from '../../../../shared/statistics/decomposition/price-volume-mix.ts';
import {
  InvalidInputError,
  NonFiniteInputError,
  UndefinedStatisticError,
} from '../../../../shared/statistics/errors.ts';
import { computeFourierTerms } from '../../../../shared/statistics/regression/fourier.ts';

const size = fc.double({ min: 1e-3, max: 1e6, noNaN: true });

describe('logarithmic mean', () => {
  it('lies between geometric and arithmetic mean and is symmetric', () => {
    // Carlson 1972, The logarithmic mean.
    fc.assert(
      fc.property(size, size, (a, b) => {
        const mean = computeLogarithmicMean(a, b);
        expect(mean).toBeGreaterThanOrEqual(Math.sqrt(a * b) * (1 - 1e-12));
        expect(mean).toBeLessThanOrEqual(((a + b) / 2) * (1 + 1e-12));
        expect(computeLogarithmicMean(b, a) / mean).toBeCloseTo(1, 12);
      }),
    );
  });

  it('keeps its digits for nearly equal ends', () => {
    // L(1 + δ, 1) = 1 + δ/2 − δ²/12 + …
    expect(computeLogarithmicMean(1 + 2 ** -30, 1)).toBeCloseTo(1 + 2 ** -31, 15);
    expect(computeLogarithmicMean(5, 5)).toBe(5);
    expect(computeLogarithmicMean(0, 5)).toBe(0);
    expect(computeLogarithmicMean(Math.E, 1)).toBeCloseTo(Math.E - 1, 14);
  });

  it('shares out a change exactly and whatever the order of the factors', () => {
    fc.assert(
      fc.property(
        fc.double({ min: 0.1, max: 1e5, noNaN: true }),
        fc.array(fc.double({ min: -2, max: 2, noNaN: true }), { minLength: 1, maxLength: 8 }),
        (from, logFactors) => {
          const to = from * Math.exp(logFactors.reduce((sum, value) => sum + value, 0));
          const parts = shareByLogarithmicMean(from, to, logFactors);
          const total = parts.reduce((sum, part) => sum + part, 0);
          expect(Math.abs(total - (to - from))).toBeLessThanOrEqual(1e-8 * (from + to));
          const reversed = shareByLogarithmicMean(from, to, [...logFactors].reverse()).reverse();
          reversed.forEach((part, k) => expect(Math.abs(part - parts[k]!)).toBeLessThanOrEqual(1e-8 * (from + to)));
        },
      ),
    );
  });

  it('gives the parts of a doubling by price and a halving by season by hand', () => {
    // 100 → 100 by factors 2 and ½: L = 100, parts ±100·ln 2 (Ang 2004, LMDI-I).
    const parts = shareByLogarithmicMean(100, 100, [Math.LN2, -Math.LN2]);
    expect(parts[0]).toBeCloseTo(100 * Math.LN2, 12);
    expect(parts[1]).toBeCloseTo(-100 * Math.LN2, 12);
  });

  it('gives activity, structure and intensity of the two-sector example', () => {
    // Illustration in Ang's papers on LMDI-I (Energy Policy 32 (2004) 1131, 33 (2005) 867), source and data from memory: energy 30 → 80 and 20 → 16, output
    // 10 → 40 and 40 → 40, so shares 0.2/0.8 → 0.5/0.5 and intensities 3/0.5 → 2/0.4. Parts recomputed in Python as Σ L(E₁, E₀)·ln(factor).
    const sectors = [
      { energy: [30, 80], output: [10, 40] },
      { energy: [20, 16], output: [40, 40] },
    ] as const;
    const total = [50, 80] as const;
    const parts = sectors.map(({ energy, output }) =>
      shareByLogarithmicMean(energy[0], energy[1], [
        Math.log(total[1] / total[0]),
        Math.log(output[1] / total[1] / (output[0] / total[0])),
        Math.log(energy[1] / output[1] / (energy[0] / output[0])),
      ]),
    );
    const [activity, structure, intensity] = [0, 1, 2].map((k) => parts.reduce((sum, part) => sum + part[k]!, 0));
    expect(activity).toBeCloseTo(32.3846379109, 9);
    expect(structure).toBeCloseTo(38.2848673502, 9);
    expect(intensity).toBeCloseTo(-24.6695052611, 9);
    expect(activity! + structure! + intensity!).toBeCloseTo(46, 12);
    // The same as factors of 96 / 50: exp(part / L(96, 50)).
    const mean = computeLogarithmicMean(96, 50);
    [1.5828800073, 1.7210198075, 0.704802387].forEach((factor, k) => {
      expect(Math.exp([activity!, structure!, intensity!][k]! / mean)).toBeCloseTo(factor, 9);
    });
  });

  it('refuses factors that don’t explain the change, and ends that are not positive', () => {
    expect(() => shareByLogarithmicMean(100, 150, [0.1])).toThrow(InvalidInputError);
    expect(() => shareByLogarithmicMean(0, 150, [0.1])).toThrow(InvalidInputError);
    expect(() => shareByLogarithmicMean(1, 1, [NaN])).toThrow(NonFiniteInputError);
    expect(() => computeLogarithmicMean(-1, 2)).toThrow(InvalidInputError);
  });
});

describe('price–volume–mix', () => {
  it('splits the published example', () => {
    // A 100 @ 2 → 90 @ 2.2; B 50 @ 5 → 80 @ 4.5: volume +60, mix +70, price −22, recomputed.
    const split = splitPriceVolumeMix([
      { fromUnits: 100, fromPrice: 2, toUnits: 90, toPrice: 2.2 },
      { fromUnits: 50, fromPrice: 5, toUnits: 80, toPrice: 4.5 },
    ]);
    expect(split.fromValue).toBeCloseTo(450, 12);
    expect(split.toValue).toBeCloseTo(558, 12);
    expect(split.volume).toBeCloseTo(60, 12);
    expect(split.mix).toBeCloseTo(70, 12);
    expect(split.price).toBeCloseTo(-22, 12);
  });

  it('adds up to the change of value, and has no mix with one item', () => {
    const item = fc.record({ fromUnits: size, fromPrice: size, toUnits: size, toPrice: size });
    fc.assert(
      fc.property(fc.array(item, { minLength: 1, maxLength: 6 }), (items) => {
        const split = splitPriceVolumeMix(items);
        const scale = split.fromValue + split.toValue + Math.abs(split.volume) + Math.abs(split.mix);
        const gap = split.volume + split.mix + split.price - (split.toValue - split.fromValue);
        expect(Math.abs(gap)).toBeLessThanOrEqual(1e-12 * scale * items.length);
        if (items.length === 1) expect(Math.abs(split.mix)).toBeLessThanOrEqual(1e-12 * scale);
      }),
    );
  });

  it('refuses a start without units', () => {
    expect(() => splitPriceVolumeMix([])).toThrow(UndefinedStatisticError);
  });
});

describe('Fourier terms', () => {
  it('have the published values at week 1', () => {
    // m = 365.25/7, t = 1, recomputed.
    const expected = [0.120126, 0.992759, 0.238513, 0.971139];
    computeFourierTerms(1, 2).forEach((term, k) => expect(term).toBeCloseTo(expected[k]!, 6));
  });

  it('return after a whole period', () => {
    computeFourierTerms(3, 3, 52).forEach((term, k) => {
      expect(computeFourierTerms(55, 3, 52)[k]).toBeCloseTo(term, 12);
    });
  });
});

import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { computeChiSquareTail } from '../../../../shared/statistics/distributions/chi-square.ts';
import { computeFTail } from '../../../../shared/statistics/distributions/f-distribution.ts';
import { computeNormalCdf, computeNormalQuantile } from '../../../../shared/statistics/distributions/normal.ts';
import {
  computeStudentQuantile,
  computeStudentTwoSided,
} from '../../../../shared/statistics/distributions/student-t.ts';
import { InvalidInputError } from '../../../../shared/statistics/errors.ts';
import { countCorrectDigits, readReferenceJson } from '../../../reference/read-reference.ts';

interface Entry {
  f: 'qt' | 'two_sided_t' | 'chi_square_tail' | 'f_tail' | 'pnorm' | 'qnorm';
  value: number;
  degrees: number | null;
  other: number | null;
  result: number;
}

const compute: Record<Entry['f'], (value: number, degrees: number, other: number) => number> = {
  qt: computeStudentQuantile,
  two_sided_t: computeStudentTwoSided,
  chi_square_tail: computeChiSquareTail,
  f_tail: computeFTail,
  pnorm: computeNormalCdf,
  qnorm: computeNormalQuantile,
};

describe('distributions', () => {
  const entries = (readReferenceJson('r-checks/r_checks.json') as { distributions: Entry[] }).distributions;

  it.each(['qt', 'two_sided_t', 'chi_square_tail', 'f_tail', 'pnorm', 'qnorm'] as const)(
    '%s has R’s value over the whole grid to 11 digits',
    (name) => {
      // Source: R 4.2.2 (qt, pt, pchisq, pf, pnorm, qnorm), tests/reference/r-checks.
      const grid = entries.filter((entry) => entry.f === name);
      expect(grid.length).toBeGreaterThan(7);
      for (const { value, degrees, other, result } of grid) {
        // Below the smallest normal double R's own figures lose their digits.
        if (Math.abs(result) < 1e-300) continue;
        const ours = compute[name](value, degrees ?? 0, other ?? 0);
        expect(countCorrectDigits(ours, result), `${name}(${value}, ${degrees}, ${other})`).toBeGreaterThan(11);
      }
    },
  );

  it('has the t quantiles of the printed tables', () => {
    // Source: Abramowitz & Stegun, table 26.10, two-sided 95 %: 1 → 12.706, 10 → 2.228, 30 → 2.042, 120 → 1.980 (memory).
    const table = [
      [1, 12.706],
      [10, 2.228],
      [30, 2.042],
      [120, 1.98],
    ] as const;
    for (const [degrees, quantile] of table) expect(computeStudentQuantile(0.975, degrees)).toBeCloseTo(quantile, 3);
  });

  it('turns a t quantile back into its probability', () => {
    fc.assert(
      fc.property(
        fc.double({ min: 1e-10, max: 0.499, noNaN: true }),
        fc.double({ min: 0.6, max: 5000, noNaN: true }),
        (tail, degrees) => {
          const t = computeStudentQuantile(tail, degrees);
          expect(t).toBeLessThan(0);
          expect(computeStudentTwoSided(t, degrees) / 2 / tail).toBeCloseTo(1, 9);
          expect(computeStudentQuantile(1 - tail, degrees)).toBeGreaterThan(0);
        },
      ),
    );
  });

  it('has F(1, n) as the square of t(n)', () => {
    fc.assert(
      fc.property(fc.double({ min: 0.01, max: 30, noNaN: true }), fc.integer({ min: 1, max: 500 }), (t, degrees) => {
        const p = computeStudentTwoSided(t, degrees);
        expect(computeFTail(t * t, 1, degrees) / p).toBeCloseTo(1, 9);
      }),
    );
  });

  it('refuses probabilities and degrees that mean nothing', () => {
    for (const probability of [0, 1, -1, NaN]) {
      expect(() => computeNormalQuantile(probability)).toThrow(InvalidInputError);
      expect(() => computeStudentQuantile(probability, 3)).toThrow(InvalidInputError);
    }
    expect(() => computeStudentQuantile(0.9, 0)).toThrow(InvalidInputError);
    expect(() => computeStudentTwoSided(NaN, 3)).toThrow(InvalidInputError);
    expect(() => computeChiSquareTail(-1, 3)).toThrow(InvalidInputError);
    expect(() => computeFTail(1, 0, 3)).toThrow(InvalidInputError);
  });
});

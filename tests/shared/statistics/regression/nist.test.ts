import { describe, expect, it } from 'vitest';
import {
  computeClassicalCovariance,
  computeStandardErrors,
} from '../../../../shared/statistics/regression/covariance.ts';
import { summariseFit } from '../../../../shared/statistics/regression/fit-summary.ts';
import { fitLeastSquares } from '../../../../shared/statistics/regression/least-squares.ts';
import { buildNistInput, readNistSets } from '../../../reference/build-designs.ts';
import { countCorrectDigits, countWorstDigits } from '../../../reference/read-reference.ts';

/** Digits that the worst coefficient and the worst standard error must have. Certified values: NIST/ITL StRD, linear regression. */
const required: Record<string, { coefficients: number; errors: number }> = {
  Norris: { coefficients: 13, errors: 13 },
  Pontius: { coefficients: 13, errors: 12 },
  NoInt1: { coefficients: 14, errors: 14 },
  NoInt2: { coefficients: 14, errors: 14 },
  Filip: { coefficients: 7.5, errors: 7.5 },
  Longley: { coefficients: 13, errors: 13 },
  Wampler1: { coefficients: 13, errors: 8.5 },
  Wampler2: { coefficients: 12, errors: 12 },
  Wampler3: { coefficients: 13, errors: 12 },
  Wampler4: { coefficients: 13, errors: 12 },
  Wampler5: { coefficients: 13, errors: 12 },
};

describe('NIST StRD linear regression', () => {
  const sets = readNistSets();

  it('covers all eleven sets', () => {
    expect(sets.map((set) => set.name).sort()).toEqual(Object.keys(required).sort());
  });

  it.each(sets.map((set) => [set.name, set] as const))('%s keeps its digits', (name, set) => {
    const input = buildNistInput(set);
    const fit = fitLeastSquares(input);
    expect(fit.rank).toBe(set.k);
    expect(fit.dropped).toEqual([]);
    expect(
      countWorstDigits(
        fit.coefficients.map((value) => value!),
        set.parameters.map((parameter) => parameter.estimate),
      ),
    ).toBeGreaterThanOrEqual(required[name]!.coefficients);
    const errors = computeStandardErrors(computeClassicalCovariance(input, fit), fit.rank);
    expect(
      countWorstDigits(
        errors,
        set.parameters.map((parameter) => parameter.se),
      ),
    ).toBeGreaterThanOrEqual(required[name]!.errors);
  });

  it.each(sets.filter((set) => set.anova.ss_res > 0).map((set) => [set.name, set] as const))(
    '%s has the certified residual deviation, R² and F',
    (name, set) => {
      const input = buildNistInput(set);
      const summary = summariseFit(input, fitLeastSquares(input), !name.startsWith('NoInt'));
      const digits = name === 'Filip' ? 7 : 11;
      expect(countCorrectDigits(summary.sigma, set.residual_sd)).toBeGreaterThan(digits);
      expect(countCorrectDigits(summary.rSquared, set.r_squared)).toBeGreaterThan(digits);
      expect(countCorrectDigits(summary.overallF!.value, Number(set.anova.F))).toBeGreaterThan(digits);
    },
  );
});

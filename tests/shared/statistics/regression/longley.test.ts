import { describe, expect, it } from 'vitest';
import {
  analyseCondition,
  computeConditionNumber,
  computeVarianceInflation,
  findInseparableColumns,
} from '../../../../shared/statistics/diagnostics/collinearity.ts';
import { testBreuschPagan } from '../../../../shared/statistics/diagnostics/breusch-pagan.ts';
import { computeDurbinWatson } from '../../../../shared/statistics/diagnostics/durbin-watson.ts';
import { computeInfluence } from '../../../../shared/statistics/diagnostics/influence.ts';
import { buildCoefficientTable } from '../../../../shared/statistics/regression/coefficient-table.ts';
import {
  computeClassicalCovariance,
  computeHeteroskedasticCovariance,
  computeNeweyWestCovariance,
  computeStandardErrors,
} from '../../../../shared/statistics/regression/covariance.ts';
import { summariseFit } from '../../../../shared/statistics/regression/fit-summary.ts';
import { fitLeastSquares } from '../../../../shared/statistics/regression/least-squares.ts';
import { buildNistInput, readNistSets } from '../../../reference/build-designs.ts';
import { countCorrectDigits, countWorstDigits, readReferenceJson } from '../../../reference/read-reference.ts';

interface LongleyReference {
  summary: Record<string, number>;
  coefficients: Record<string, number>[];
  durbin_watson: number;
  breusch_pagan_studentised: { stat: number; df: number; p: number };
  vif: Record<string, number>;
  condition_number: Record<string, number>;
  rows: Record<string, number>[];
}

/** Source of every value: R 4.2.2 (lm, sandwich, lmtest, car), tests/reference/longley/longley_lm.json. */
describe('Longley against R', () => {
  const expected = readReferenceJson('longley/longley_lm.json') as LongleyReference;
  const input = buildNistInput(readNistSets().find((set) => set.name === 'Longley')!);
  const fit = fitLeastSquares(input);
  const column = (name: string): number[] => expected.coefficients.map((row) => row[name]!);

  it('gives the same coefficients, t, p and 95 % intervals', () => {
    const table = buildCoefficientTable(fit, computeClassicalCovariance(input, fit), 9);
    expect(
      countWorstDigits(
        table.map((row) => row.estimate),
        column('estimate'),
      ),
    ).toBeGreaterThan(11);
    expect(
      countWorstDigits(
        table.map((row) => row.standardError),
        column('se'),
      ),
    ).toBeGreaterThan(11);
    expect(
      countWorstDigits(
        table.map((row) => row.tStatistic!),
        column('t'),
      ),
    ).toBeGreaterThan(11);
    expect(
      countWorstDigits(
        table.map((row) => row.twoSidedP!),
        column('p'),
      ),
    ).toBeGreaterThan(10);
    expect(
      countWorstDigits(
        table.map((row) => row.lower),
        column('ci95_lo'),
      ),
    ).toBeGreaterThan(11);
    expect(
      countWorstDigits(
        table.map((row) => row.upper),
        column('ci95_hi'),
      ),
    ).toBeGreaterThan(11);
  });

  it.each(['HC0', 'HC1', 'HC2', 'HC3', 'NW2'] as const)('gives the %s errors of exact rational arithmetic', (kind) => {
    const covariance =
      kind === 'NW2'
        ? computeNeweyWestCovariance(input, fit, { lag: 2 })
        : computeHeteroskedasticCovariance(input, fit, kind);
    const errors = computeStandardErrors(covariance, fit.rank);
    // Source: fractions in Python, tests/reference/longley/make-exact-sandwich.py.
    const exact = (readReferenceJson('longley/longley_exact_sandwich.json') as Record<string, string[]>)[kind]!;
    expect(countWorstDigits(errors, exact.map(Number))).toBeGreaterThan(13);
    // R's own figures hold 7.6 digits of the exact ones here.
    expect(countWorstDigits(errors, column(kind === 'NW2' ? 'se_NW_lag2' : `se_${kind}`))).toBeGreaterThan(7.5);
  });

  it('gives the same σ, R², F, likelihood, AIC and BIC', () => {
    const summary = summariseFit(input, fit, true);
    const { sigma, r_squared, adj_r_squared, F, F_p, logLik, AIC, BIC } = expected.summary;
    expect(
      countWorstDigits(
        [
          summary.sigma,
          summary.rSquared,
          summary.adjustedRSquared,
          summary.overallF!.value,
          summary.overallF!.p,
          summary.logLikelihood,
          summary.aic,
          summary.bic,
        ],
        [sigma!, r_squared!, adj_r_squared!, F!, F_p!, logLik!, AIC!, BIC!],
      ),
    ).toBeGreaterThan(10);
  });

  it('gives the same Durbin–Watson and Breusch–Pagan', () => {
    expect(countCorrectDigits(computeDurbinWatson(fit.residuals), expected.durbin_watson)).toBeGreaterThan(9);
    const test = testBreuschPagan(input, fit.residuals, 'koenker');
    expect(test.degrees).toBe(6);
    expect(countCorrectDigits(test.statistic, expected.breusch_pagan_studentised.stat)).toBeGreaterThan(8);
    expect(countCorrectDigits(test.p, expected.breusch_pagan_studentised.p)).toBeGreaterThan(8);
  });

  it('gives the same inflation factors and condition numbers', () => {
    const inflation = computeVarianceInflation(input, fit);
    expect(inflation[0]).toBeNull();
    expect(
      countWorstDigits(
        inflation.slice(1).map((value) => value!),
        Object.values(expected.vif),
      ),
    ).toBeGreaterThan(10);
    const scaled = expected.condition_number['columns_scaled_to_unit_length_incl_intercept']!;
    expect(countCorrectDigits(analyseCondition(fit).indices.at(-1), scaled)).toBeGreaterThan(10);
    expect(countCorrectDigits(computeConditionNumber(fit), expected.condition_number['raw_X']!)).toBeGreaterThan(7);
  });

  it('gives the same Belsley proportions as an SVD in R, and says which effects can’t be told apart', () => {
    const r = (
      readReferenceJson('r-checks/r_checks.json') as {
        belsley_longley_nist: { indices: number[]; proportions: number[][] };
      }
    ).belsley_longley_nist;
    const analysis = analyseCondition(fit);
    expect(countWorstDigits(analysis.indices, r.indices)).toBeGreaterThan(9);
    analysis.proportions.forEach((row, k) => {
      row.forEach((share, j) => expect(share).toBeCloseTo(r.proportions[k]![j]!, 9));
    });
    expect(findInseparableColumns(fit).at(-1)).toEqual(fit.kept.filter((_, j) => r.proportions.at(-1)[j]! > 0.5));
  });

  it('gives the same residuals, leverages and influence of every row', () => {
    const influence = computeInfluence(fit).map((row) => row!);
    const rows = (name: string): number[] => expected.rows.map((row) => row[name]!);
    expect(countWorstDigits(fit.fitted, rows('fitted'))).toBeGreaterThan(11);
    expect(countWorstDigits(fit.residuals, rows('residual'))).toBeGreaterThan(9);
    expect(countWorstDigits(fit.hatDiagonal, rows('leverage'))).toBeGreaterThan(10);
    expect(
      countWorstDigits(
        influence.map((row) => row.standardised),
        rows('standardised'),
      ),
    ).toBeGreaterThan(9);
    expect(
      countWorstDigits(
        influence.map((row) => row.studentised),
        rows('studentised'),
      ),
    ).toBeGreaterThan(9);
    expect(
      countWorstDigits(
        influence.map((row) => row.cooksDistance),
        rows('cooks_distance'),
      ),
    ).toBeGreaterThan(8);
  });
});

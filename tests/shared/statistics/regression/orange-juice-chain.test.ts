import { describe, expect, it } from 'vitest';
import { computeCoverage } from '../../../../shared/statistics/accuracy/interval-accuracy.ts';
import { computeBias, computeWape } from '../../../../shared/statistics/accuracy/relative-error.ts';
import { computeAutocorrelations, testLjungBox } from '../../../../shared/statistics/diagnostics/autocorrelation.ts';
import { testBreuschPagan } from '../../../../shared/statistics/diagnostics/breusch-pagan.ts';
import {
  analyseCondition,
  computeConditionNumber,
  computeVarianceInflation,
} from '../../../../shared/statistics/diagnostics/collinearity.ts';
import { computeDurbinWatson } from '../../../../shared/statistics/diagnostics/durbin-watson.ts';
import { computeInfluence } from '../../../../shared/statistics/diagnostics/influence.ts';
import { computeFTail } from '../../../../shared/statistics/distributions/f-distribution.ts';
import { buildCoefficientTable } from '../../../../shared/statistics/regression/coefficient-table.ts';
import {
  computeClassicalCovariance,
  computeHeteroskedasticCovariance,
  computeNeweyWestCovariance,
  computeStandardErrors,
} from '../../../../shared/statistics/regression/covariance.ts';
import { buildNormalEquations, fitSpecification } from '../../../../shared/statistics/regression/fast-least-squares.ts';
import { summariseFit } from '../../../../shared/statistics/regression/fit-summary.ts';
import { fitLeastSquares } from '../../../../shared/statistics/regression/least-squares.ts';
import { computePredictionInterval, predictRow } from '../../../../shared/statistics/regression/prediction.ts';
import { computeLognormalFactor, computeSmearingFactor } from '../../../../shared/statistics/regression/smearing.ts';
import { buildChainModel } from '../../../reference/build-designs.ts';
import {
  countCorrectDigits,
  countWorstDigits,
  readColumn,
  readReferenceCsv,
  readReferenceJson,
} from '../../../reference/read-reference.ts';

interface TestValue {
  stat: number;
  df: number;
  p: number;
}

interface ChainReference {
  summary: Record<string, number>;
  vif: Record<string, number>;
  condition_number: Record<string, number>;
  durbin_watson: number;
  breusch_pagan_koenker: TestValue;
  breusch_pagan_original: TestValue;
  ljung_box_lag8: TestValue;
  ljung_box_lag13: TestValue;
  acf_residuals_lags_1_8: number[];
  joint_F_ten_cross_prices: { F: number; df1: number; df2: number; p: number };
  own_price_and_promo_only: { summary: Record<string, number>; coefficients: Record<string, number | string>[] };
  duan_smearing: number;
  lognormal_factor: number;
}

/** Source of every value: R 4.2.2 (lm, sandwich, lmtest, car), tests/reference/oj/B04_chain_*. */
describe('orange juice, chain series of B04, against R', () => {
  const expected = readReferenceJson('oj/B04_chain_lm.json') as ChainReference;
  const table = readReferenceCsv('oj/B04_chain_coefficients.csv');
  const { input } = buildChainModel(40, 152);
  const fit = fitLeastSquares(input);
  const classical = computeClassicalCovariance(input, fit);
  const summary = summariseFit(input, fit, true);

  it('has R’s columns in R’s order', () => {
    expect(input.names).toEqual(table.map((row) => row['term']));
    expect(fit.rank).toBe(19);
  });

  it('gives the same coefficients, errors, t, p and intervals', () => {
    const rows = buildCoefficientTable(fit, classical, summary.residualDegrees);
    expect(
      countWorstDigits(
        rows.map((row) => row.estimate),
        readColumn(table, 'estimate'),
      ),
    ).toBeGreaterThan(11);
    expect(
      countWorstDigits(
        rows.map((row) => row.standardError),
        readColumn(table, 'se_classical'),
      ),
    ).toBeGreaterThan(12);
    expect(
      countWorstDigits(
        rows.map((row) => row.tStatistic!),
        readColumn(table, 't'),
      ),
    ).toBeGreaterThan(11);
    expect(
      countWorstDigits(
        rows.map((row) => row.twoSidedP!),
        readColumn(table, 'p'),
      ),
    ).toBeGreaterThan(10);
    expect(
      countWorstDigits(
        rows.map((row) => row.lower),
        readColumn(table, 'ci95_lo'),
      ),
    ).toBeGreaterThan(10);
    expect(
      countWorstDigits(
        rows.map((row) => row.upper),
        readColumn(table, 'ci95_hi'),
      ),
    ).toBeGreaterThan(10);
  });

  it.each(['HC0', 'HC1', 'HC2', 'HC3'] as const)('gives the same %s errors', (kind) => {
    const errors = computeStandardErrors(computeHeteroskedasticCovariance(input, fit, kind), fit.rank);
    expect(countWorstDigits(errors, readColumn(table, `se_${kind}`))).toBeGreaterThan(11);
  });

  it.each([
    [false, 'se_NW_lag4'],
    [true, 'se_NW_lag4_adjusted'],
  ] as const)('gives the same Newey–West errors at lag 4, adjusted: %s', (isAdjusted, name) => {
    const errors = computeStandardErrors(computeNeweyWestCovariance(input, fit, { lag: 4, isAdjusted }), fit.rank);
    expect(countWorstDigits(errors, readColumn(table, name))).toBeGreaterThan(11);
  });

  it('gives the same σ, R², F, likelihood, AIC and BIC', () => {
    const { sigma, rss, r_squared, adj_r_squared, F, F_p, logLik, AIC, BIC } = expected.summary;
    expect(
      countWorstDigits(
        [
          summary.sigma,
          fit.residualSumOfSquares,
          summary.rSquared,
          summary.adjustedRSquared,
          summary.overallF!.value,
          summary.overallF!.p,
          summary.logLikelihood,
          summary.aic,
          summary.bic,
        ],
        [sigma!, rss!, r_squared!, adj_r_squared!, F!, F_p!, logLik!, AIC!, BIC!],
      ),
    ).toBeGreaterThan(11);
    // Hurvich & Tsai 1989 by hand: K = 20, n = 113.
    expect(summary.aicc).toBeCloseTo(AIC! + (2 * 20 * 21) / (113 - 21), 9);
  });

  it('gives the same Durbin–Watson, Breusch–Pagan and Ljung–Box', () => {
    expect(countCorrectDigits(computeDurbinWatson(fit.residuals), expected.durbin_watson)).toBeGreaterThan(12);
    const pairs = [
      [testBreuschPagan(input, fit.residuals, 'koenker'), expected.breusch_pagan_koenker],
      [testBreuschPagan(input, fit.residuals, 'original'), expected.breusch_pagan_original],
      [testLjungBox(fit.residuals, 8), expected.ljung_box_lag8],
      [testLjungBox(fit.residuals, 13), expected.ljung_box_lag13],
    ] as const;
    for (const [test, reference] of pairs) {
      expect(test.degrees).toBe(reference.df);
      expect(countCorrectDigits(test.statistic, reference.stat)).toBeGreaterThan(11);
      expect(countCorrectDigits(test.p, reference.p)).toBeGreaterThan(11);
    }
    expect(
      countWorstDigits(computeAutocorrelations(fit.residuals, 8), expected.acf_residuals_lags_1_8),
    ).toBeGreaterThan(10);
  });

  it('gives the same inflation factors and condition numbers', () => {
    const inflation = computeVarianceInflation(input, fit);
    expect(inflation[0]).toBeNull();
    expect(
      countWorstDigits(
        inflation.slice(1).map((value) => value!),
        Object.values(expected.vif),
      ),
    ).toBeGreaterThan(11);
    const scaled = expected.condition_number['columns_scaled_to_unit_length_incl_intercept']!;
    expect(countCorrectDigits(analyseCondition(fit).indices.at(-1), scaled)).toBeGreaterThan(11);
    expect(countCorrectDigits(computeConditionNumber(fit), expected.condition_number['raw_X']!)).toBeGreaterThan(11);
  });

  it('gives the same influence of all 113 rows', () => {
    const rows = readReferenceCsv('oj/B04_chain_rows.csv');
    const influence = computeInfluence(fit).map((row) => row!);
    expect(countWorstDigits(fit.fitted, readColumn(rows, 'fitted_log'))).toBeGreaterThan(11);
    expect(countWorstDigits(fit.residuals, readColumn(rows, 'residual'))).toBeGreaterThan(9);
    expect(countWorstDigits(fit.hatDiagonal, readColumn(rows, 'leverage'))).toBeGreaterThan(11);
    expect(
      countWorstDigits(
        influence.map((row) => row.standardised),
        readColumn(rows, 'standardised'),
      ),
    ).toBeGreaterThan(9);
    expect(
      countWorstDigits(
        influence.map((row) => row.studentised),
        readColumn(rows, 'studentised'),
      ),
    ).toBeGreaterThan(9);
    expect(
      countWorstDigits(
        influence.map((row) => row.cooksDistance),
        readColumn(rows, 'cooks_distance'),
      ),
    ).toBeGreaterThan(8);
    expect(
      countWorstDigits(
        influence.map((row) => row.dffits),
        readColumn(rows, 'dffits'),
      ),
    ).toBeGreaterThan(9);
  });

  it('finds the same subset fit and joint F of the ten cross prices from one set of normal equations', () => {
    const equations = buildNormalEquations(input);
    const columns = input.names!.flatMap((name, j) => (/^lp_(?!B04)/.test(name) ? [] : [j]));
    const short = fitSpecification(equations, { columns });
    const reference = expected.own_price_and_promo_only;
    expect(short.isFromQr).toBe(false);
    expect(
      countWorstDigits(
        columns.map((j) => short.coefficients[j]!),
        reference.coefficients.map((row) => Number(row['Estimate'])),
      ),
    ).toBeGreaterThan(11);
    expect(countCorrectDigits(short.residualSumOfSquares, reference.summary['rss']!)).toBeGreaterThan(12);
    const joint = expected.joint_F_ten_cross_prices;
    const value =
      (short.residualSumOfSquares - fit.residualSumOfSquares) /
      10 /
      (fit.residualSumOfSquares / summary.residualDegrees);
    expect(countCorrectDigits(value, joint.F)).toBeGreaterThan(11);
    expect(countCorrectDigits(computeFTail(value, joint.df1, joint.df2), joint.p)).toBeGreaterThan(10);
  });

  it('gives the same smearing factors', () => {
    expect(countCorrectDigits(computeSmearingFactor(fit.residuals), expected.duan_smearing)).toBeGreaterThan(12);
    expect(countCorrectDigits(computeLognormalFactor(summary.sigma), expected.lognormal_factor)).toBeGreaterThan(12);
  });

  it('predicts the eight held-out weeks with the same errors, ranges and accuracy', () => {
    const holdout = buildChainModel(153, 160);
    const reference = readReferenceCsv('oj/B04_chain_holdout_predictions.csv');
    const predictions = Array.from({ length: holdout.input.rows }, (_, i) =>
      predictRow(fit, classical, summary.sigma, holdout.input.design.subarray(i * 19, (i + 1) * 19)),
    );
    expect(
      countWorstDigits(
        predictions.map((row) => row.mean),
        readColumn(reference, 'log_pred'),
      ),
    ).toBeGreaterThan(11);
    expect(
      countWorstDigits(
        predictions.map((row) => row.meanError),
        readColumn(reference, 'se_fit'),
      ),
    ).toBeGreaterThan(11);
    expect(
      countWorstDigits(
        predictions.map((row) => row.observationError),
        readColumn(reference, 'se_pred'),
      ),
    ).toBeGreaterThan(11);
    const ranges = predictions.map((row) => computePredictionInterval(row, summary.residualDegrees, 0.8));
    expect(
      countWorstDigits(
        ranges.map((range) => range.lower),
        readColumn(reference, 'log_lo80'),
      ),
    ).toBeGreaterThan(11);
    const accuracy = readReferenceJson('oj/B04_holdout_accuracy.json') as Record<string, Record<string, number>>;
    const medians = predictions.map((row) => Math.exp(row.mean));
    expect(countCorrectDigits(computeWape(holdout.units, medians), accuracy['chain_median']!['wape']!)).toBeGreaterThan(
      11,
    );
    expect(computeBias(holdout.units, medians)).toBeCloseTo(accuracy['chain_median']!['bias']!, 12);
    const factor = computeSmearingFactor(fit.residuals);
    const means = medians.map((median) => median * factor);
    expect(countCorrectDigits(computeWape(holdout.units, means), accuracy['chain_duan']!['wape']!)).toBeGreaterThan(11);
    const coverage = computeCoverage(
      holdout.units,
      ranges.map((range) => Math.exp(range.lower)),
      ranges.map((range) => Math.exp(range.upper)),
    );
    expect(coverage).toBe(accuracy['chain_median']!['cov80']);
  });
});

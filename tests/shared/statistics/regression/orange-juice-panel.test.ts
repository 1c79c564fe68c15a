import { beforeAll, describe, expect, it } from 'vitest';
import { computeCoverage } from '../../../../shared/statistics/accuracy/interval-accuracy.ts';
import { computeBias, computeWape } from '../../../../shared/statistics/accuracy/relative-error.ts';
import { testBreuschPagan } from '../../../../shared/statistics/diagnostics/breusch-pagan.ts';
import { analyseCondition, computeVarianceInflation } from '../../../../shared/statistics/diagnostics/collinearity.ts';
import {
  computeDurbinWatson,
  computeDurbinWatsonBySeries,
} from '../../../../shared/statistics/diagnostics/durbin-watson.ts';
import { computeInfluence } from '../../../../shared/statistics/diagnostics/influence.ts';
import { buildCoefficientTable } from '../../../../shared/statistics/regression/coefficient-table.ts';
import {
  computeClassicalCovariance,
  computeClusteredCovariance,
  computeHeteroskedasticCovariance,
  computeStandardErrors,
} from '../../../../shared/statistics/regression/covariance.ts';
import { fitLeastSquaresFast } from '../../../../shared/statistics/regression/fast-least-squares.ts';
import { summariseFit, type FitSummary } from '../../../../shared/statistics/regression/fit-summary.ts';
import { fitLeastSquares } from '../../../../shared/statistics/regression/least-squares.ts';
import { computePredictionInterval, predictRow } from '../../../../shared/statistics/regression/prediction.ts';
import { computeSmearingFactor } from '../../../../shared/statistics/regression/smearing.ts';
import type { LeastSquaresFit } from '../../../../shared/statistics/regression/types.ts';
import { buildElasticityModel, buildPanelModel, type OrangeJuiceModel } from '../../../reference/build-designs.ts';
import {
  countCorrectDigits,
  countWorstDigits,
  readColumn,
  readReferenceCsv,
  readReferenceJson,
} from '../../../reference/read-reference.ts';

interface PanelReference {
  summary: Record<string, number>;
  vif: Record<string, number>;
  condition_number: Record<string, number>;
  durbin_watson_within_store: number;
  durbin_watson_row_order: number;
  breusch_pagan_koenker: { stat: number; df: number; p: number };
  breusch_pagan_original: { stat: number; df: number; p: number };
  duan_smearing: number;
}

/** Source of every value: R 4.2.2 (lm, sandwich, lmtest, car), tests/reference/oj/B04_panel_*. */
describe('orange juice, store panel of B04, against R', { timeout: 60_000 }, () => {
  const expected = readReferenceJson('oj/B04_panel_lm.json') as PanelReference;
  const table = readReferenceCsv('oj/B04_panel_coefficients.csv');
  let model: OrangeJuiceModel;
  let fit: LeastSquaresFit;
  let classical: Float64Array;
  let summary: FitSummary;

  beforeAll(() => {
    model = buildPanelModel('B04', 40, 152);
    fit = fitLeastSquares(model.input);
    classical = computeClassicalCovariance(model.input, fit);
    summary = summariseFit(model.input, fit, true);
  }, 60_000);

  it('has R’s 101 columns in R’s order on 9,019 rows', () => {
    expect(model.input.names).toEqual(table.map((row) => row['term']));
    expect(model.input.rows).toBe(9019);
    expect(fit.rank).toBe(101);
  });

  it('gives the same coefficients, classical errors, t, p and intervals', () => {
    const rows = buildCoefficientTable(fit, classical, summary.residualDegrees);
    expect(
      countWorstDigits(
        rows.map((row) => row.estimate),
        readColumn(table, 'estimate'),
      ),
    ).toBeGreaterThan(9);
    expect(
      countWorstDigits(
        rows.map((row) => row.standardError),
        readColumn(table, 'se_classical'),
      ),
    ).toBeGreaterThan(11);
    expect(
      countWorstDigits(
        rows.map((row) => row.tStatistic!),
        readColumn(table, 't_classical'),
      ),
    ).toBeGreaterThan(9);
    const p = readColumn(table, 'p_classical');
    rows.forEach((row, k) => {
      // Below that R stops at the smallest normal double, half of 2.2e-308, for what is really 1e-322.
      if (p[k]! > 1e-300) expect(countCorrectDigits(row.twoSidedP!, p[k]!)).toBeGreaterThan(9);
      else expect(row.twoSidedP).toBeLessThan(1e-300);
    });
    expect(
      countWorstDigits(
        rows.map((row) => row.lower),
        readColumn(table, 'ci95_lo'),
      ),
    ).toBeGreaterThan(9);
  });

  it('gives the same HC1 errors', () => {
    const errors = computeStandardErrors(computeHeteroskedasticCovariance(model.input, fit, 'HC1'), fit.rank);
    expect(countWorstDigits(errors, readColumn(table, 'se_HC1'))).toBeGreaterThan(10);
  });

  it('gives the same errors clustered by store, and by week six times as large for the own price', () => {
    const byStore = computeStandardErrors(computeClusteredCovariance(model.input, fit, model.stores), fit.rank);
    const byWeek = computeStandardErrors(computeClusteredCovariance(model.input, fit, model.weeks), fit.rank);
    expect(countWorstDigits(byStore, readColumn(table, 'se_cluster_store'))).toBeGreaterThan(10);
    expect(countWorstDigits(byWeek, readColumn(table, 'se_cluster_week'))).toBeGreaterThan(10);
    expect(byWeek[1]! / byStore[1]!).toBeGreaterThan(6);
  });

  it('gives the same σ, R², F, likelihood, AIC and BIC', () => {
    const { sigma, rss, r_squared, adj_r_squared, F, logLik, AIC, BIC } = expected.summary;
    expect(
      countWorstDigits(
        [
          summary.sigma,
          fit.residualSumOfSquares,
          summary.rSquared,
          summary.adjustedRSquared,
          summary.overallF!.value,
          summary.logLikelihood,
          summary.aic,
          summary.bic,
        ],
        [sigma!, rss!, r_squared!, adj_r_squared!, F!, logLik!, AIC!, BIC!],
      ),
    ).toBeGreaterThan(11);
  });

  it('gives the same Durbin–Watson within stores and in row order', () => {
    expect(countCorrectDigits(computeDurbinWatson(fit.residuals), expected.durbin_watson_row_order)).toBeGreaterThan(
      11,
    );
    const within = computeDurbinWatsonBySeries(fit.residuals, model.stores, model.weeks, 'ignore');
    expect(countCorrectDigits(within, expected.durbin_watson_within_store)).toBeGreaterThan(11);
  });

  it('gives the same Breusch–Pagan', () => {
    for (const [kind, reference] of [
      ['koenker', expected.breusch_pagan_koenker],
      ['original', expected.breusch_pagan_original],
    ] as const) {
      const test = testBreuschPagan(model.input, fit.residuals, kind);
      expect(test.degrees).toBe(reference.df);
      expect(countCorrectDigits(test.statistic, reference.stat)).toBeGreaterThan(10);
      expect(countCorrectDigits(test.p, reference.p)).toBeGreaterThan(8);
    }
  });

  it('gives the same inflation factors and scaled condition number', () => {
    const inflation = computeVarianceInflation(model.input, fit);
    expect(
      countWorstDigits(
        inflation.slice(1, 19).map((value) => value!),
        Object.values(expected.vif),
      ),
    ).toBeGreaterThan(11);
    const scaled = expected.condition_number['columns_scaled_to_unit_length_incl_intercept']!;
    expect(countCorrectDigits(analyseCondition(fit).indices.at(-1), scaled)).toBeGreaterThan(10);
  });

  it('gives the same influence of the rows R lists', () => {
    const rows = readReferenceCsv('oj/B04_panel_influence_rows.csv');
    const influence = computeInfluence(fit);
    const listed = rows.map((row) => influence[Number(row['row']) - 1]!);
    expect(
      countWorstDigits(
        listed.map((row) => row.leverage),
        readColumn(rows, 'leverage'),
      ),
    ).toBeGreaterThan(11);
    expect(
      countWorstDigits(
        listed.map((row) => row.studentised),
        readColumn(rows, 'studentised'),
      ),
    ).toBeGreaterThan(10);
    expect(
      countWorstDigits(
        listed.map((row) => row.cooksDistance),
        readColumn(rows, 'cooks_distance'),
      ),
    ).toBeGreaterThan(10);
  });

  it('predicts the 630 held-out rows with the same errors, ranges and accuracy', () => {
    const holdout = buildPanelModel('B04', 153, 160);
    const reference = readReferenceCsv('oj/B04_panel_holdout_predictions.csv');
    const width = model.input.columns;
    const predictions = Array.from({ length: holdout.input.rows }, (_, i) =>
      predictRow(fit, classical, summary.sigma, holdout.input.design.subarray(i * width, (i + 1) * width)),
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
    ).toBeGreaterThan(10);
    const medians = predictions.map((row) => Math.exp(row.mean));
    const accuracy = readReferenceJson('oj/B04_holdout_accuracy.json') as Record<string, Record<string, number>>;
    const median = accuracy['panel_median']!;
    expect(countCorrectDigits(computeWape(holdout.units, medians), median['wape']!)).toBeGreaterThan(11);
    expect(countCorrectDigits(computeBias(holdout.units, medians), median['bias']!)).toBeGreaterThan(11);
    for (const [level, name] of [
      [0.8, 'cov80'],
      [0.95, 'cov95'],
    ] as const) {
      const ranges = predictions.map((row) => computePredictionInterval(row, summary.residualDegrees, level));
      const coverage = computeCoverage(
        holdout.units,
        ranges.map((range) => Math.exp(range.lower)),
        ranges.map((range) => Math.exp(range.upper)),
      );
      expect(countCorrectDigits(coverage, median[name]!)).toBeGreaterThan(12);
    }
    // The plain factor raises the error of this hold-out from 0.515 to 0.691: means and medians have to be told apart.
    const factor = computeSmearingFactor(fit.residuals);
    expect(countCorrectDigits(factor, expected.duan_smearing)).toBeGreaterThan(11);
    const means = medians.map((value) => value * factor);
    expect(countCorrectDigits(computeWape(holdout.units, means), accuracy['panel_duan']!['wape']!)).toBeGreaterThan(11);
  });
});

describe('orange juice, own-price elasticities', { timeout: 60_000 }, () => {
  it('gives R’s elasticity of all eleven brands, with and without cross prices and season, by the fast kernel', () => {
    // Source: R 4.2.2 lm, tests/reference/oj/own_price_elasticities.csv.
    const reference = readReferenceCsv('oj/own_price_elasticities.csv');
    const full = reference.map((row) => fitLeastSquaresFast(buildPanelModel(row['brand']!, 40, 160).input));
    expect(full.every((fit) => !fit.isFromQr)).toBe(true);
    expect(
      countWorstDigits(
        full.map((fit) => fit.coefficients[1]!),
        readColumn(reference, 'own_price'),
      ),
    ).toBeGreaterThan(11);
    const mean = full.reduce((sum, fit) => sum + fit.coefficients[1]!, 0) / full.length;
    // Plausibility: −2.62 over 1,851 published estimates (Bijmolt, van Heerde & Pieters 2005).
    expect(mean).toBeGreaterThan(-3.5);
    expect(mean).toBeLessThan(-1.7);
    const short = reference.map((row) => fitLeastSquaresFast(buildPanelModel(row['brand']!, 40, 160, true).input));
    expect(
      countWorstDigits(
        short.map((fit) => fit.coefficients[1]!),
        readColumn(reference, 'own_price_no_cross_no_season'),
      ),
    ).toBeGreaterThan(11);
  });

  it('gives the six published elasticities of B10, B05 and B01', () => {
    // Source: Taddy, Business Data Science (published course scripts), to the printed digits.
    const input = buildElasticityModel();
    expect(input.rows).toBe(28_947);
    const fit = fitLeastSquares(input);
    const b = Object.fromEntries(input.names!.map((name, j) => [name, fit.coefficients[j]!]));
    // We get −2.774156: the printed fifth decimal differs by one.
    expect(b['price']).toBeCloseTo(-2.77415, 4);
    const errors = computeStandardErrors(computeClassicalCovariance(input, fit), fit.rank);
    expect(errors[1]).toBeCloseTo(0.03883, 5);
    const unfeatured = [b['price']!, b['price']! + b['price:second']!, b['price']! + b['price:third']!];
    const featured = [
      unfeatured[0]! + b['price:featured']!,
      unfeatured[1]! + b['price:featured']! + b['price:second:featured']!,
      unfeatured[2]! + b['price:featured']! + b['price:third:featured']!,
    ];
    [-2.774, -1.991, -2.038].forEach((value, k) => expect(unfeatured[k]).toBeCloseTo(value, 3));
    [-3.245, -3.571, -3.495].forEach((value, k) => expect(featured[k]).toBeCloseTo(value, 3));
  });
});

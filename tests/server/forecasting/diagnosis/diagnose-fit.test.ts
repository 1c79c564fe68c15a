import { beforeAll, describe, expect, it } from 'vitest';
import { diagnoseFit, type FitDiagnosis } from '../../../../server/forecasting/diagnosis/diagnose-fit.ts';
import type { FittedRows } from '../../../../server/forecasting/diagnosis/fitted-rows.ts';
import { partialOutDeviations } from '../../../../server/forecasting/diagnosis/line-slopes.ts';
import { createNormal, createRandom } from '../../../../server/forecasting/ranges/random.ts';
import { testBreuschPagan } from '../../../../shared/statistics/diagnostics/breusch-pagan.ts';
import { computeDurbinWatsonBySeries } from '../../../../shared/statistics/diagnostics/durbin-watson.ts';
import { computeInfluence } from '../../../../shared/statistics/diagnostics/influence.ts';
import {
  computeClassicalCovariance,
  computeClusteredCovariance,
  computeHeteroskedasticCovariance,
  computeNeweyWestCovariance,
  computeStandardErrors,
} from '../../../../shared/statistics/regression/covariance.ts';
import { summariseFit } from '../../../../shared/statistics/regression/fit-summary.ts';
import { fitLeastSquares } from '../../../../shared/statistics/regression/least-squares.ts';
import { buildInput, buildOnes, buildPanelModel } from '../../../reference/build-designs.ts';
import {
  countCorrectDigits,
  countWorstDigits,
  readColumn,
  readReferenceCsv,
  readReferenceJson,
} from '../../../reference/read-reference.ts';
import { fitAbsorbed } from './absorbed-rows.ts';

interface PanelReference {
  summary: Record<string, number>;
  vif: Record<string, number>;
  breusch_pagan_koenker: { stat: number; df: number; p: number };
}

/** Source of every value: R 4.2.2 (lm with a dummy per store, sandwich, lmtest, car), tests/reference/oj/B04_panel_*. */
describe('diagnosis with absorbed stores, against R with a dummy for each', { timeout: 60_000 }, () => {
  const expected = readReferenceJson('oj/B04_panel_lm.json') as PanelReference;
  const table = readReferenceCsv('oj/B04_panel_coefficients.csv').slice(1, 19);
  const { input, stores, weeks } = buildPanelModel('B04', 40, 152);
  let rows: FittedRows;
  let diagnosis: FitDiagnosis;

  beforeAll(() => {
    const design = new Float64Array(input.rows * 18);
    for (let i = 0; i < input.rows; i++) {
      design.set(input.design.subarray(i * input.columns + 1, i * input.columns + 19), i * 18);
    }
    rows = fitAbsorbed({
      names: input.names!.slice(1, 19),
      design,
      response: input.response,
      series: stores,
      weeks,
    });
    diagnosis = diagnoseFit(rows);
  }, 60_000);

  it('counts the absorbed intercepts as parameters', () => {
    expect(diagnosis.parameters).toBeCloseTo(101, 8);
    expect(diagnosis.residualDegrees).toBeCloseTo(expected.summary['df_residual']!, 8);
    expect(diagnosis).toMatchObject({ rows: 9019, series: 83, weeks: 113 });
  });

  it('gives R’s estimates with classical, HC1 and by-week errors', () => {
    const errors = diagnosis.effects.map((effect) => effect.errors!);
    for (const [values, column] of [
      [diagnosis.effects.map((effect) => effect.estimate), 'estimate'],
      [errors.map((kinds) => kinds.classical!), 'se_classical'],
      [errors.map((kinds) => kinds.hc1!), 'se_HC1'],
      [errors.map((kinds) => kinds.week!), 'se_cluster_week'],
    ] as const) {
      expect(countWorstDigits(values, readColumn(table, column)), column).toBeGreaterThan(9);
    }
    const price = errors[0]!;
    expect(price.classical).toBeCloseTo(0.0575, 4);
    expect(price.hc1).toBeCloseTo(0.0658, 4);
    expect(price.week).toBeCloseTo(0.437, 3);
  });

  it('gives R’s R², likelihood, AIC and BIC', () => {
    const { r_squared, adj_r_squared, logLik, AIC, BIC } = expected.summary;
    const { logLikelihood, aic, bic } = diagnosis.likelihood!;
    expect(
      countWorstDigits(
        [diagnosis.rSquared!, diagnosis.adjustedRSquared!, logLikelihood, aic, bic],
        [r_squared!, adj_r_squared!, logLik!, AIC!, BIC!],
      ),
    ).toBeGreaterThan(10);
  });

  it('gives R’s Breusch–Pagan', () => {
    const { stat, df, p } = expected.breusch_pagan_koenker;
    expect(diagnosis.breuschPagan!.degrees).toBe(df);
    expect(countCorrectDigits(diagnosis.breuschPagan!.statistic, stat)).toBeGreaterThan(9);
    expect(countCorrectDigits(diagnosis.breuschPagan!.p, p)).toBeGreaterThan(7);
  });

  it('gives R’s inflation factors, once the variation between stores is taken out of them', () => {
    // car::vif measures a column's whole variation, ours that within the stores: the ratio of the two is a property of the column alone.
    const within = input.names!.slice(1, 19).map((name, k) => {
      const values = Float64Array.from({ length: input.rows }, (_, i) => input.design[i * input.columns + k + 1]!);
      const mean = values.reduce((sum, value) => sum + value, 0) / input.rows;
      const whole = values.reduce((sum, value) => sum + (value - mean) ** 2, 0);
      let squares = 0;
      for (let i = 0; i < input.rows; i++) squares += rows.design[i * 18 + k]! ** 2;
      return expected.vif[name]! * (squares / whole);
    });
    expect(
      countWorstDigits(
        diagnosis.effects.map((effect) => effect.varianceInflation!),
        within,
      ),
    ).toBeGreaterThan(9);
  });

  it('gives R’s leverages and Cook’s distances, the largest ten first', () => {
    const listed = readReferenceCsv('oj/B04_panel_influence_rows.csv');
    expect(
      countWorstDigits(
        listed.map((row) => rows.leverages[Number(row['row']) - 1]!),
        readColumn(listed, 'leverage'),
      ),
    ).toBeGreaterThan(10);
    const known = [...listed].sort((a, b) => Number(b['cooks_distance']) - Number(a['cooks_distance']));
    const top = diagnosis.influential[0]!;
    expect(top.location).toBe(known[0]!['store']);
    expect(top.weekStart).toBe(`week ${known[0]!['week']}`);
    expect(countCorrectDigits(top.cooksDistance, Number(known[0]!['cooks_distance']))).toBeGreaterThan(9);
    expect(diagnosis.influential).toHaveLength(10);
    const distances = diagnosis.influential.map((row) => row.cooksDistance);
    expect(distances).toEqual([...distances].sort((a, b) => b - a));
  });
});

/** Series of unequal length with weights, missing weeks and two columns, deviations for two of the series. */
function makeLine(seed: number): {
  design: Float64Array;
  response: Float64Array;
  weights: Float64Array;
  series: string[];
  weeks: number[];
} {
  const random = createRandom(seed);
  const normal = createNormal(random);
  const design: number[] = [];
  const response: number[] = [];
  const weights: number[] = [];
  const series: string[] = [];
  const weeks: number[] = [];
  ['a', 'b', 'c'].forEach((label, s) => {
    for (let t = 0; t < 60 - 9 * s; t++) {
      if (random() < 0.1) continue;
      const price = 0.2 * normal();
      const feature = random() < 0.3 ? 1 : 0;
      design.push(price, feature, s === 0 ? price : 0, s === 1 ? price : 0);
      response.push(s + (-2 - 0.5 * s) * price + 0.6 * feature + 0.3 * normal() + 0.2 * Math.sin(t));
      weights.push(0.5 + random());
      series.push(label);
      weeks.push(t);
    }
  });
  return {
    design: Float64Array.from(design),
    response: Float64Array.from(response),
    weights: Float64Array.from(weights),
    series,
    weeks,
  };
}

describe('diagnosis with absorbed intercepts, against explicit dummies', () => {
  const line = makeLine(3);
  const names = ['price', 'feature', 'price of a', 'price of b'];
  const labels = ['a', 'b', 'c'];
  const rowCount = line.series.length;
  const column = (k: number): Float64Array =>
    Float64Array.from({ length: rowCount }, (_, i) => line.design[i * 4 + k]!);
  const withDummies = (isWeighted: boolean) => {
    const input = {
      ...buildInput(
        {
          ...Object.fromEntries(names.map((name, k) => [name, column(k)])),
          ...Object.fromEntries(labels.map((label) => [label, line.series.map((own) => (own === label ? 1 : 0))])),
        },
        line.response,
      ),
      ...(isWeighted ? { weights: line.weights } : {}),
    };
    return { input, fit: fitLeastSquares(input) };
  };

  it('has every error of the line’s slopes, with the deviations partialled out, to 1e-9', () => {
    const { input, fit } = withDummies(true);
    const diagnosis = diagnoseFit(fitAbsorbed({ ...line, names, lineColumns: 2 }));
    const kinds = {
      classical: computeClassicalCovariance(input, fit),
      hc1: computeHeteroskedasticCovariance(input, fit, 'HC1'),
      hc3: computeHeteroskedasticCovariance(input, fit, 'HC3'),
      week: computeClusteredCovariance(input, fit, line.weeks),
      neweyWest: computeNeweyWestCovariance(input, fit, {
        lag: diagnosis.neweyWestLag,
        isAdjusted: true,
        periods: line.weeks,
      }),
    };
    for (const [kind, covariance] of Object.entries(kinds)) {
      const errors = computeStandardErrors(covariance, fit.rank);
      diagnosis.effects.forEach((effect, k) => {
        expect(Math.abs(effect.errors![kind as keyof typeof kinds]! / errors[k]! - 1), kind).toBeLessThan(1e-9);
      });
    }
    expect(diagnosis.neweyWestLag).toBe(3);
  });

  it('has the same criteria, Durbin–Watson and Cook’s distances to 1e-9', () => {
    const { input, fit } = withDummies(false);
    const rows = fitAbsorbed({ ...line, names, weights: undefined });
    const diagnosis = diagnoseFit(rows);
    const summary = summariseFit(input, fit, true);
    expect(diagnosis.parameters).toBeCloseTo(7, 9);
    expect(diagnosis.likelihood!.aic).toBeCloseTo(summary.aic, 8);
    expect(diagnosis.likelihood!.aicc).toBeCloseTo(summary.aicc!, 8);
    expect(diagnosis.likelihood!.bic).toBeCloseTo(summary.bic, 8);
    expect(diagnosis.adjustedRSquared).toBeCloseTo(summary.adjustedRSquared, 9);
    const watson = computeDurbinWatsonBySeries(fit.residuals, line.series, line.weeks);
    expect(diagnosis.durbinWatson).toBeCloseTo(watson, 9);
    const distances = computeInfluence(fit)
      .map((row) => row!.cooksDistance)
      .sort((a, b) => b - a);
    diagnosis.influential.forEach((row, k) => expect(row.cooksDistance).toBeCloseTo(distances[k]!, 9));
    const breuschPagan = testBreuschPagan(input, fit.residuals, 'koenker');
    expect(diagnosis.breuschPagan!.statistic).toBeCloseTo(breuschPagan.statistic, 8);
    expect(diagnosis.breuschPagan!.degrees).toBe(breuschPagan.degrees);
  });

  it('counts shrunken slopes for less than one parameter and keeps the posterior errors', () => {
    const penalties = Float64Array.from([0, 0, 8, 3]);
    const rows = fitAbsorbed({ ...line, names, lineColumns: 2, penalties });
    const diagnosis = diagnoseFit(rows);
    expect(diagnosis.parameters).toBeGreaterThan(5);
    expect(diagnosis.parameters).toBeLessThan(7);
    const { input } = withDummies(true);
    const whole = { ...input, penalties: Float64Array.from([...penalties, 0, 0, 0]) };
    const fit = fitLeastSquares(whole);
    const errors = computeStandardErrors(computeClassicalCovariance(whole, fit), fit.rank);
    const robust = computeStandardErrors(computeHeteroskedasticCovariance(whole, fit, 'HC3'), fit.rank);
    diagnosis.effects.forEach((effect, k) => {
      expect(Math.abs(effect.errors!.classical! / errors[k]! - 1)).toBeLessThan(1e-9);
      expect(Math.abs(effect.errors!.hc3! / robust[k]! - 1)).toBeLessThan(1e-9);
    });
    const { factorR } = partialOutDeviations(rows);
    expect(factorR).toHaveLength(4);
  });
});

describe('effects that can’t be told apart', () => {
  it('names both of two columns that move together, and no third', () => {
    const random = createRandom(5);
    const normal = createNormal(random);
    const rows = 120;
    const price = Float64Array.from({ length: rows }, normal);
    const feature = price.map((value) => value + 0.005 * normal());
    const season = Float64Array.from({ length: rows }, normal);
    const { design } = buildInput({ price, feature, season }, buildOnes(rows));
    const response = price.map((value, i) => value + season[i]! + normal());
    const diagnosis = diagnoseFit(
      fitAbsorbed({
        names: ['price', 'feature', 'season'],
        design,
        response,
        series: Array.from({ length: rows }, () => 'a'),
        weeks: Array.from({ length: rows }, (_, t) => t),
      }),
    );
    expect(diagnosis.effects.map((effect) => effect.inseparableFrom)).toEqual([['feature'], ['price'], []]);
    const worst = diagnosis.condition.at(-1);
    expect(worst.index).toBeGreaterThan(30);
    expect(worst.shares.map(({ name }) => name).sort()).toEqual(['feature', 'price']);
    expect(diagnosis.effects[0]!.varianceInflation).toBeGreaterThan(1000);
    expect(diagnosis.effects[2]!.varianceInflation).toBeLessThan(2);
  });
});

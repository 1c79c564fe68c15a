import { describe, expect, it } from 'vitest';
import { computeVarianceInflation } from '../../../../shared/statistics/diagnostics/collinearity.ts';
import { computeDurbinWatson } from '../../../../shared/statistics/diagnostics/durbin-watson.ts';
import { computeInfluence } from '../../../../shared/statistics/diagnostics/influence.ts';
import { buildCoefficientTable } from '../../../../shared/statistics/regression/coefficient-table.ts';
import {
  computeClassicalCovariance,
  computeHeteroskedasticCovariance,
  computeStandardErrors,
} from '../../../../shared/statistics/regression/covariance.ts';
import { summariseFit } from '../../../../shared/statistics/regression/fit-summary.ts';
import { fitLeastSquares } from '../../../../shared/statistics/regression/least-squares.ts';
import type { LeastSquaresInput } from '../../../../shared/statistics/regression/types.ts';
import { buildInput, buildOnes } from '../../../reference/build-designs.ts';
import {
  countCorrectDigits,
  countWorstDigits,
  readColumn,
  readReferenceCsv,
  readReferenceJson,
} from '../../../reference/read-reference.ts';

interface TextbookReference {
  summary: Record<string, number>;
  coefficients: Record<string, number>[];
  durbin_watson: number;
  vif: Record<string, number>;
  rows: Record<string, number>[];
}

const references = readReferenceJson('textbook/textbook_lm.json') as Record<string, TextbookReference>;

function buildTextile(transform: (value: number) => number): LeastSquaresInput {
  const rows = readReferenceCsv('textbook/textile_demand.csv');
  return buildInput(
    {
      '(Intercept)': buildOnes(rows.length),
      income: readColumn(rows, 'income').map(transform),
      price: readColumn(rows, 'relprice').map(transform),
    },
    readColumn(rows, 'consume').map(transform),
  );
}

function buildIceCream(hasLaggedTemperature: boolean): LeastSquaresInput {
  const all = readReferenceCsv('textbook/ice_cream_demand.csv');
  const rows = hasLaggedTemperature ? all.slice(1) : all;
  return buildInput(
    {
      '(Intercept)': buildOnes(rows.length),
      income: readColumn(rows, 'income'),
      price: readColumn(rows, 'price'),
      temperature: readColumn(rows, 'temp'),
      ...(hasLaggedTemperature ? { lagged: readColumn(all.slice(0, -1), 'temp') } : {}),
    },
    readColumn(rows, 'demand'),
  );
}

/** Source of every value: R 4.2.2, tests/reference/textbook/textbook_lm.json; data Theil 1971, Hildreth & Lu 1960. */
describe('textbook demand equations against R', () => {
  it.each([
    ['textile_log', buildTextile(Math.log)],
    ['textile_log10', buildTextile(Math.log10)],
    ['textile_linear', buildTextile((value) => value)],
    ['ice_cream', buildIceCream(false)],
    ['ice_cream_with_lagged_temp', buildIceCream(true)],
  ] as const)('%s', (name, input) => {
    const expected = references[name]!;
    const column = (key: string): number[] => expected.coefficients.map((row) => row[key]!);
    const fit = fitLeastSquares(input);
    const summary = summariseFit(input, fit, true);
    const table = buildCoefficientTable(fit, computeClassicalCovariance(input, fit), summary.residualDegrees);
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
        table.map((row) => row.twoSidedP!),
        column('p'),
      ),
    ).toBeGreaterThan(10);
    for (const kind of ['HC1', 'HC3'] as const) {
      const errors = computeStandardErrors(computeHeteroskedasticCovariance(input, fit, kind), fit.rank);
      expect(countWorstDigits(errors, column(`se_${kind}`))).toBeGreaterThan(9);
    }
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
    expect(countCorrectDigits(computeDurbinWatson(fit.residuals), expected.durbin_watson)).toBeGreaterThan(10);
    expect(
      countWorstDigits(
        computeVarianceInflation(input, fit)
          .slice(1)
          .map((value) => value!),
        Object.values(expected.vif),
      ),
    ).toBeGreaterThan(10);
    expect(
      countWorstDigits(
        fit.hatDiagonal,
        expected.rows.map((row) => row['leverage']!),
      ),
    ).toBeGreaterThan(10);
    expect(
      countWorstDigits(
        computeInfluence(fit).map((row) => row!.cooksDistance),
        expected.rows.map((row) => row['cooks_distance']!),
      ),
    ).toBeGreaterThan(8);
  });

  it('gives the printed textile elasticities', () => {
    // Source: Theil 1971, p. 102: 1.37 + 1.14 log income − 0.83 log price (memory).
    const fit = fitLeastSquares(buildTextile(Math.log10));
    [1.37, 1.14, -0.83].forEach((printed, j) => expect(fit.coefficients[j]).toBeCloseTo(printed, 2));
  });

  it('gives Anscombe’s four sets one line', () => {
    // Source: Anscombe 1973: 3.00 + 0.500 x, R² 0.67.
    const rows = readReferenceCsv('textbook/anscombe.csv');
    for (const [x, y] of [
      ['x', 'y1'],
      ['x', 'y2'],
      ['x', 'y3'],
      ['x4', 'y4'],
    ] as const) {
      const input = buildInput({ '(Intercept)': buildOnes(11), x: readColumn(rows, x) }, readColumn(rows, y));
      const fit = fitLeastSquares(input);
      expect(fit.coefficients[0]).toBeCloseTo(3, 1);
      expect(fit.coefficients[1]).toBeCloseTo(0.5, 2);
      expect(summariseFit(input, fit, true).rSquared).toBeCloseTo(0.67, 2);
    }
  });
});

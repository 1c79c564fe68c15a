import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { InvalidInputError, NonFiniteInputError, TooFewRowsError } from '../../../../shared/statistics/errors.ts';
import { buildCoefficientTable } from '../../../../shared/statistics/regression/coefficient-table.ts';
import {
  computeClassicalCovariance,
  computeClusteredCovariance,
  computeHeteroskedasticCovariance,
  computeNeweyWestCovariance,
  computeResidualDegrees,
  computeStandardErrors,
} from '../../../../shared/statistics/regression/covariance.ts';
import { summariseFit } from '../../../../shared/statistics/regression/fit-summary.ts';
import { fitLeastSquares } from '../../../../shared/statistics/regression/least-squares.ts';
import type { LeastSquaresInput } from '../../../../shared/statistics/regression/types.ts';
import { buildInput, buildOnes } from '../../../reference/build-designs.ts';
import { countWorstDigits, readReferenceJson } from '../../../reference/read-reference.ts';

/** Thousandths, so that a column is either dependent or far from the tolerance of the rank, where a rounding error would decide. */
const value = fc.integer({ min: -10000, max: 10000 }).map((thousandths) => thousandths / 1000);

/** Designs of up to 25 × 5 with an intercept and a response. */
const problem = fc
  .record({ columns: fc.integer({ min: 1, max: 5 }), extraRows: fc.integer({ min: 2, max: 20 }) })
  .chain(({ columns, extraRows }) => {
    const rows = columns + extraRows;
    return fc.record({
      rows: fc.constant(rows),
      columns: fc.constant(columns),
      design: fc.array(value, { minLength: rows * columns, maxLength: rows * columns }),
      response: fc.array(value, { minLength: rows, maxLength: rows }),
    });
  })
  .map(({ rows, columns, design, response }): LeastSquaresInput => ({
    rows,
    columns,
    design: Float64Array.from(design, (x, k) => (k % columns === 0 ? 1 : x)),
    response: Float64Array.from(response),
  }));

interface WeightedReference {
  y: number[];
  x1: number[];
  x2: number[];
  w: number[];
  week: number[];
  coefficients: number[];
  se: number[];
  sigma: number;
  r_squared: number;
  adj_r_squared: number;
  F: number;
  logLik: number;
  AIC: number;
  BIC: number;
  fitted: number[];
  hat_of_weighted_rows: number[];
  se_HC0: number[];
  se_HC1: number[];
  se_HC3: number[];
  se_cluster_week: number[];
  se_panel_NW_lag2: number[];
}

describe('least squares', () => {
  it('leaves residuals orthogonal to every kept column', () => {
    fc.assert(
      fc.property(problem, (input) => {
        const fit = fitLeastSquares(input);
        const length = Math.hypot(...input.response) + 1;
        for (const j of fit.kept) {
          let product = 0;
          let size = 0;
          for (let i = 0; i < input.rows; i++) {
            const x = input.design[i * input.columns + j]!;
            product += x * fit.residuals[i]!;
            size += x * x;
          }
          expect(Math.abs(product)).toBeLessThanOrEqual(1e-11 * length * Math.sqrt(size));
        }
      }),
    );
  });

  it('has leverages that lie in 0 … 1 and sum to the rank', () => {
    fc.assert(
      fc.property(problem, (input) => {
        const fit = fitLeastSquares(input);
        let sum = 0;
        for (const leverage of fit.hatDiagonal) {
          expect(leverage).toBeGreaterThanOrEqual(0);
          expect(leverage).toBeLessThanOrEqual(1);
          sum += leverage;
        }
        expect(sum).toBeCloseTo(fit.rank, 9);
      }),
    );
  });

  it('drops a later copy of a column and keeps the earlier one, fitted values unmoved', () => {
    fc.assert(
      fc.property(problem, fc.double({ min: 0.5, max: 3, noNaN: true }), (input, factor) => {
        const before = fitLeastSquares(input);
        const wide = input.columns + 1;
        const design = new Float64Array(input.rows * wide);
        for (let i = 0; i < input.rows; i++) {
          let copy = 0;
          for (let j = 0; j < input.columns; j++) {
            design[i * wide + j] = input.design[i * input.columns + j]!;
            copy += factor * (j + 1) * input.design[i * input.columns + j]!;
          }
          design[i * wide + input.columns] = copy;
        }
        const after = fitLeastSquares({ ...input, design, columns: wide });
        expect(after.kept).toEqual(before.kept);
        expect(after.dropped).toEqual([...before.dropped, input.columns]);
        expect(after.coefficients.at(-1)).toBeNull();
        for (let i = 0; i < input.rows; i++) expect(after.fitted[i]).toBeCloseTo(before.fitted[i]!, 8);
      }),
    );
  });

  it('counts a row of weight 2 as the row twice', () => {
    fc.assert(
      fc.property(problem, (input) => {
        const weights = Float64Array.from({ length: input.rows }, (_, i) => (i === 0 ? 2 : 1));
        const design = Float64Array.from([...input.design.subarray(0, input.columns), ...input.design]);
        const response = Float64Array.from([input.response[0]!, ...input.response]);
        const once = fitLeastSquares({ ...input, weights });
        const twice = fitLeastSquares({ ...input, design, response, rows: input.rows + 1 });
        expect(once.rank).toBe(twice.rank);
        expect(once.residualSumOfSquares).toBeCloseTo(twice.residualSumOfSquares, 7);
        for (let i = 0; i < input.rows; i++) expect(once.fitted[i]).toBeCloseTo(twice.fitted[i + 1]!, 7);
      }),
    );
  });

  it('shrinks a penalised coefficient as the normal equations say', () => {
    // One centred column: b = Σxy / (Σx² + λ) = 14 / (14 + 6), by hand.
    const input = buildInput({ x: [1, 2, 3] }, Float64Array.of(1, 2, 3));
    const fit = fitLeastSquares({ ...input, penalties: Float64Array.of(6) });
    expect(fit.coefficients[0]).toBeCloseTo(0.7, 14);
    expect(computeResidualDegrees({ ...input, penalties: Float64Array.of(6) }, fit)).toBeCloseTo(3 - 0.7, 12);
  });

  it('keeps a penalised column that the data alone could not tell from another', () => {
    const input = buildInput({ a: [1, 2, 3, 4], b: [1, 2, 3, 4] }, Float64Array.of(2, 4, 6, 8));
    const fit = fitLeastSquares({ ...input, penalties: Float64Array.of(1, 1) });
    expect(fit.dropped).toEqual([]);
    expect(fit.coefficients[0]).toBeCloseTo(fit.coefficients[1]!, 12);
    // (Σx² + ½λ)·2b = Σxy with Σx² = 30, Σxy = 60, by hand.
    expect(fit.coefficients[0]).toBeCloseTo(60 / 61, 12);
  });

  it('recovers columns whose sizes differ by 300 powers of ten', () => {
    const tiny = [1e-150, 2e-150, 4e-150, 3e-150];
    const large = [1e150, 3e150, 2e150, 7e150];
    const response = Float64Array.from(tiny, (x, i) => 2e150 * x + 3e-150 * large[i]!);
    const fit = fitLeastSquares(buildInput({ tiny, large }, response));
    expect(fit.coefficients[0]! / 2e150).toBeCloseTo(1, 12);
    expect(fit.coefficients[1]! / 3e-150).toBeCloseTo(1, 12);
  });

  it('drops an aliased column like R’s lm', () => {
    // Source: R 4.2.2 lm, tests/reference/r-checks.
    const r = (
      readReferenceJson('r-checks/r_checks.json') as {
        aliased: { coefficients: (number | null)[]; residuals: number[] };
      }
    ).aliased;
    const a = [1, 2, 3, 4, 5, 6, 7];
    const input = buildInput(
      {
        '(Intercept)': buildOnes(7),
        a,
        b: a.map((x) => 2 * x + 3),
        c: [1, 0, 1, 0, 1, 1, 0],
        d: [2, 1, 3, 2, 4, 4, 3],
      },
      Float64Array.of(1, 2, 4, 3, 5, 7, 6),
    );
    const fit = fitLeastSquares(input);
    expect(fit.dropped.map((j) => input.names![j])).toEqual(['b']);
    fit.coefficients.forEach((coefficient, j) => {
      const expected = r.coefficients[j];
      if (expected === null || expected === undefined) expect(coefficient).toBeNull();
      else expect(coefficient).toBeCloseTo(expected, 12);
    });
    fit.residuals.forEach((residual, i) => expect(residual).toBeCloseTo(r.residuals[i]!, 12));
  });

  it('agrees with R on weights, two of them 0', () => {
    // Source: R 4.2.2 lm(weights=), sandwich; robust errors on the rows of positive weight, tests/reference/r-checks.
    const r = (readReferenceJson('r-checks/r_checks.json') as { weighted: WeightedReference }).weighted;
    const input = {
      ...buildInput({ '(Intercept)': buildOnes(40), x1: r.x1, x2: r.x2 }, Float64Array.from(r.y)),
      weights: Float64Array.from(r.w),
    };
    const fit = fitLeastSquares(input);
    const summary = summariseFit(input, fit, true);
    const table = buildCoefficientTable(fit, computeClassicalCovariance(input, fit), summary.residualDegrees);
    expect(
      countWorstDigits(
        table.map((row) => row.estimate),
        r.coefficients,
      ),
    ).toBeGreaterThan(12);
    expect(
      countWorstDigits(
        table.map((row) => row.standardError),
        r.se,
      ),
    ).toBeGreaterThan(12);
    expect(countWorstDigits(fit.fitted, r.fitted)).toBeGreaterThan(11);
    expect(
      countWorstDigits(
        [
          summary.sigma,
          summary.rSquared,
          summary.adjustedRSquared,
          summary.overallF!.value,
          summary.logLikelihood,
          summary.aic,
          summary.bic,
        ],
        [r.sigma, r.r_squared, r.adj_r_squared, r.F, r.logLik, r.AIC, r.BIC],
      ),
    ).toBeGreaterThan(12);
    expect(
      countWorstDigits(
        fit.hatDiagonal.filter((_, i) => r.w[i]! > 0),
        r.hat_of_weighted_rows,
      ),
    ).toBeGreaterThan(11);
    for (const kind of ['HC0', 'HC1', 'HC3'] as const) {
      const errors = computeStandardErrors(computeHeteroskedasticCovariance(input, fit, kind), 3);
      expect(countWorstDigits(errors, r[`se_${kind}`])).toBeGreaterThan(11);
    }
    const clustered = computeStandardErrors(computeClusteredCovariance(input, fit, r.week), 3);
    expect(countWorstDigits(clustered, r.se_cluster_week)).toBeGreaterThan(11);
    // vcovPL weights lag l by 1 − l / (L + 1), as Newey & West do, on the scores summed by period.
    const panel = computeStandardErrors(computeNeweyWestCovariance(input, fit, { lag: 2, periods: r.week }), 3);
    expect(countWorstDigits(panel, r.se_panel_NW_lag2)).toBeGreaterThan(11);
  });

  it('refuses too few rows', () => {
    const square = buildInput({ '(Intercept)': [1, 1], x: [1, 2] }, Float64Array.of(1, 2));
    expect(() => fitLeastSquares(square)).toThrow(TooFewRowsError);
    const weightless = buildInput({ '(Intercept)': [1, 1, 1], x: [1, 2, 3] }, Float64Array.of(1, 2, 4));
    expect(() => fitLeastSquares({ ...weightless, weights: Float64Array.of(1, 1, 0) })).toThrow(TooFewRowsError);
  });

  it('refuses what is not finite, and names column and row', () => {
    const input = buildInput({ '(Intercept)': [1, 1, 1], price: [1, NaN, 3] }, Float64Array.of(1, 2, 4));
    expect(() => fitLeastSquares(input)).toThrow('price in row 2');
    expect(() => fitLeastSquares(input)).toThrow(NonFiniteInputError);
    const endless = buildInput({ x: [1, 2, 3] }, Float64Array.of(1, Infinity, 4));
    expect(() => fitLeastSquares(endless)).toThrow('the response in row 2');
  });

  it('refuses lengths that don’t fit and negative weights or penalties', () => {
    const input = buildInput({ x: [1, 2, 3] }, Float64Array.of(1, 2, 4));
    expect(() => fitLeastSquares({ ...input, rows: 2 })).toThrow(InvalidInputError);
    expect(() => fitLeastSquares({ ...input, weights: Float64Array.of(1, 1) })).toThrow(InvalidInputError);
    expect(() => fitLeastSquares({ ...input, weights: Float64Array.of(1, -1, 1) })).toThrow(InvalidInputError);
    expect(() => fitLeastSquares({ ...input, penalties: Float64Array.of(-1) })).toThrow(InvalidInputError);
    expect(() => fitLeastSquares({ ...input, names: ['x', 'y'] })).toThrow(InvalidInputError);
  });

  it('answers a design of zeros with rank 0 and the response as residuals', () => {
    const fit = fitLeastSquares(buildInput({ empty: [0, 0, 0] }, Float64Array.of(1, 2, 4)));
    expect(fit.rank).toBe(0);
    expect(fit.coefficients).toEqual([null]);
    expect([...fit.residuals]).toEqual([1, 2, 4]);
  });

  it('reconciles a total with its parts by weighted least squares on the summing matrix', () => {
    // Source: Wickramasuriya, Athanasopoulos & Hyndman 2019 (MinT), recomputed: total/A/B 110/60/40.
    const summing = buildInput({ a: [1, 1, 0], b: [1, 0, 1] }, Float64Array.of(110, 60, 40));
    const reconcile = (variances: number[]): number[] => [
      ...fitLeastSquares({ ...summing, weights: Float64Array.from(variances, (variance) => 1 / variance) }).fitted,
    ];
    const cases: [number[], number[]][] = [
      [
        [1, 1, 1],
        [106.667, 63.333, 43.333],
      ],
      [
        [2, 1, 1],
        [105, 62.5, 42.5],
      ],
      [
        [9, 4, 1],
        [103.571, 62.857, 40.714],
      ],
    ];
    for (const [variances, expected] of cases) {
      reconcile(variances).forEach((figure, k) => expect(figure).toBeCloseTo(expected[k]!, 3));
    }
  });

  it('reads a power-form promotion effect off ln units on ln price', () => {
    // Elasticity −3.63 (van Heerde & Neslin 2008), 20 % cut: 0.8^−3.63 − 1 = +124.8 %, recomputed.
    const prices = [1, 1.1, 0.9, 1.25, 0.8, 1.05];
    const input = buildInput(
      { '(Intercept)': buildOnes(6), price: prices.map(Math.log) },
      Float64Array.from(prices, (price) => Math.log(250 * price ** -3.63)),
    );
    const elasticity = fitLeastSquares(input).coefficients[1]!;
    expect(Math.expm1(elasticity * Math.log(0.8))).toBeCloseTo(1.248, 3);
  });
});

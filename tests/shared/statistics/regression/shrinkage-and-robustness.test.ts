import { describe, expect, it } from 'vitest';
import { computeVarianceInflation } from '../../../../shared/statistics/diagnostics/collinearity.ts';
import { computeLeaveOneOutResiduals, computePress } from '../../../../shared/statistics/diagnostics/influence.ts';
import { InvalidInputError, SingularMatrixError, TooFewRowsError } from '../../../../shared/statistics/errors.ts';
import {
  computeClassicalCovariance,
  computeHeteroskedasticCovariance,
  computeNeweyWestCovariance,
  computeStandardErrors,
} from '../../../../shared/statistics/regression/covariance.ts';
import { fitHuber } from '../../../../shared/statistics/regression/huber.ts';
import { fitLeastSquares } from '../../../../shared/statistics/regression/least-squares.ts';
import { chooseRidgePenalty, prepareRidge, solveRidge } from '../../../../shared/statistics/regression/ridge.ts';
import { computeLognormalFactor, computeSmearingFactor } from '../../../../shared/statistics/regression/smearing.ts';
import { buildInput, buildOnes } from '../../../reference/build-designs.ts';
import {
  countCorrectDigits,
  countWorstDigits,
  readColumn,
  readReferenceCsv,
  readReferenceJson,
} from '../../../reference/read-reference.ts';

interface RChecks {
  ridge_longley_of_r: {
    HKB: number;
    LW: number;
    lambda: number[];
    coefficients: number[][];
    GCV: number[];
    'lambda_of_smallest_GCV_on_0.0001_grid': number;
  };
  huber_stackloss: { coefficients: number[]; scale: number };
}

const checks = readReferenceJson('r-checks/r_checks.json') as RChecks;

describe('ridge on R’s longley set, y = GNP.deflator', () => {
  const rows = readReferenceCsv('r-checks/longley_of_r.csv');
  const names = ['GNP', 'Unemployed', 'Armed.Forces', 'Population', 'Year', 'Employed'];
  const { design } = buildInput(
    Object.fromEntries(names.map((name) => [name, readColumn(rows, name)])),
    readColumn(rows, 'GNP.deflator'),
  );
  const problem = prepareRidge(design, 16, 6, readColumn(rows, 'GNP.deflator'));
  const expected = checks.ridge_longley_of_r;

  it('chooses the published penalties', () => {
    // Source: Venables & Ripley, MASS: 0.006836982 and 0.05267247 (memory), R 4.2.2 MASS::lm.ridge.
    const { hoerlKennardBaldwin, lawlessWang } = chooseRidgePenalty(problem);
    expect(hoerlKennardBaldwin).toBeCloseTo(0.006836982, 9);
    expect(lawlessWang).toBeCloseTo(0.05267247, 8);
    expect(countWorstDigits([hoerlKennardBaldwin, lawlessWang], [expected.HKB, expected.LW])).toBeGreaterThan(9);
  });

  it('gives the coefficients and GCV of lm.ridge', () => {
    expected.lambda.forEach((lambda, k) => {
      const fit = solveRidge(problem, lambda);
      expect(countWorstDigits([fit.intercept, ...fit.coefficients], expected.coefficients[k]!)).toBeGreaterThan(8);
      expect(countCorrectDigits(fit.gcv, expected.GCV[k]!)).toBeGreaterThan(9);
    });
  });

  it('has its smallest GCV at 0.0057', () => {
    const grid = Array.from({ length: 1001 }, (_, k) => k / 10_000);
    const best = grid.reduce((a, b) => (solveRidge(problem, b).gcv < solveRidge(problem, a).gcv ? b : a));
    expect(best).toBeCloseTo(expected['lambda_of_smallest_GCV_on_0.0001_grid'], 10);
    expect(best).toBeCloseTo(0.0057, 10);
  });

  it('is least squares at λ = 0, and the kernel with the same penalties at every λ', () => {
    const response = readColumn(rows, 'GNP.deflator');
    const standardised = new Float64Array(16 * 7);
    for (let i = 0; i < 16; i++) {
      standardised[i * 7] = 1;
      for (let j = 0; j < 6; j++) {
        standardised[i * 7 + j + 1] = (design[i * 6 + j]! - problem.means[j]!) / problem.deviations[j]!;
      }
    }
    for (const lambda of [0, 0.02, 1]) {
      const kernel = fitLeastSquares({
        design: standardised,
        rows: 16,
        columns: 7,
        response,
        penalties: Float64Array.of(0, ...new Array<number>(6).fill(lambda)),
      });
      const ridge = solveRidge(problem, lambda);
      const back = kernel.coefficients.slice(1).map((b, j) => b! / problem.deviations[j]!);
      expect(countWorstDigits(ridge.coefficients, back)).toBeGreaterThan(8);
      expect(
        countCorrectDigits(
          ridge.effectiveDegrees,
          kernel.hatDiagonal.reduce((a, b) => a + b, -1),
        ),
      ).toBeGreaterThan(9);
    }
  });

  it('refuses a constant predictor, too few rows and a negative λ', () => {
    expect(() => prepareRidge(Float64Array.of(1, 1, 1), 3, 1, Float64Array.of(1, 2, 3))).toThrow(SingularMatrixError);
    expect(() => prepareRidge(Float64Array.of(1, 2), 2, 1, Float64Array.of(1, 2))).toThrow(TooFewRowsError);
    expect(() => solveRidge(problem, -1)).toThrow(InvalidInputError);
  });
});

describe('Huber’s M-estimate on the stack-loss set', () => {
  const rows = readReferenceCsv('r-checks/stackloss.csv');
  const input = buildInput(
    {
      '(Intercept)': buildOnes(21),
      air: readColumn(rows, 'Air.Flow'),
      water: readColumn(rows, 'Water.Temp'),
      acid: readColumn(rows, 'Acid.Conc.'),
    },
    readColumn(rows, 'stack.loss'),
  );
  const { fit, scale, robustWeights } = fitHuber(input);

  it('has the published coefficients', () => {
    // Source: statsmodels RLM, recomputed.
    const expected = [-41.026498, 0.829384, 0.926066, -0.127847];
    fit.coefficients.forEach((coefficient, j) => expect(coefficient).toBeCloseTo(expected[j]!, 6));
  });

  it('agrees with R’s rlm but for its rounded 0.6745', () => {
    // Source: R 4.2.2 MASS::rlm(psi.huber, acc = 1e-14); it divides by 0.6745, we by 0.67448975.
    expect(
      countWorstDigits(
        fit.coefficients.map((b) => b!),
        checks.huber_stackloss.coefficients,
      ),
    ).toBeGreaterThan(4.5);
    expect(countCorrectDigits(scale, checks.huber_stackloss.scale)).toBeGreaterThan(4.5);
  });

  it('is settled: it is the weighted least squares of its own weights', () => {
    const again = fitLeastSquares({ ...input, weights: robustWeights });
    again.fitted.forEach((value, i) => expect(value).toBeCloseTo(fit.fitted[i]!, 9));
    fit.residuals.forEach((residual, i) => {
      expect(robustWeights[i]).toBeCloseTo(Math.min(1, (1.345 * scale) / Math.abs(residual)), 8);
    });
  });

  it('is least squares where nothing stands out', () => {
    const plain = fitLeastSquares(input);
    const wide = fitHuber(input, 1e6);
    wide.fit.coefficients.forEach((b, j) => expect(b).toBeCloseTo(plain.coefficients[j]!, 9));
  });
});

describe('leave-one-out on Hald’s cement', () => {
  const rows = readReferenceCsv('r-checks/hald_cement.csv');
  const fitColumns = (columns: number[]): ReturnType<typeof fitLeastSquares> => fitLeastSquares(build(columns));
  const build = (columns: number[]): ReturnType<typeof buildInput> =>
    buildInput(
      { '(Intercept)': buildOnes(13), ...Object.fromEntries(columns.map((j) => [`x${j}`, readColumn(rows, `x${j}`)])) },
      readColumn(rows, 'y'),
    );

  it('has the published PRESS and inflation factors', () => {
    // Source: Draper & Smith (memory + recomputed).
    const published: [number[], number][] = [
      [[1, 2], 93.88],
      [[1, 2, 4], 85.35],
      [[1, 2, 3], 90],
      [[1, 2, 3, 4], 110.35],
    ];
    for (const [columns, press] of published) {
      const fit = fitColumns(columns);
      expect(computePress(fit.residuals, fit.hatDiagonal)).toBeCloseTo(press, 2);
    }
    const inflation = computeVarianceInflation(build([1, 2, 3, 4]), fitColumns([1, 2, 3, 4]));
    [38.5, 254.42, 46.87, 282.51].forEach((expected, k) => expect(inflation[k + 1]).toBeCloseTo(expected, 2));
  });

  it('equals refitting without each row', () => {
    const input = build([1, 2, 4]);
    const fit = fitLeastSquares(input);
    const quick = computeLeaveOneOutResiduals(fit.residuals, fit.hatDiagonal);
    for (let out = 0; out < 13; out++) {
      const weights = Float64Array.from({ length: 13 }, (_, i) => (i === out ? 0 : 1));
      expect(quick[out]).toBeCloseTo(fitLeastSquares({ ...input, weights }).residuals[out]!, 9);
    }
  });

  it('has no answer for a row that decides its own fitted value', () => {
    const input = buildInput({ '(Intercept)': buildOnes(4), only: [1, 0, 0, 0] }, Float64Array.of(5, 1, 2, 3));
    const fit = fitLeastSquares(input);
    expect(computeLeaveOneOutResiduals(fit.residuals, fit.hatDiagonal)[0]).toBeNull();
    expect(() => computePress(fit.residuals, fit.hatDiagonal)).toThrow('row 1 has leverage 1');
    expect(() => computeHeteroskedasticCovariance(input, fit, 'HC3')).toThrow('row 1 has leverage 1');
  });
});

describe('Newey–West on macrodata', () => {
  it('has the published coefficients and errors', () => {
    // Source: statsmodels test results, recomputed: 400·Δln realinv on 400·Δln realgdp and the lagged real rate, lag 4, n/(n − k).
    const rows = readReferenceCsv('textbook/macrodata.csv');
    const grow = (name: string): Float64Array => {
      const values = readColumn(rows, name);
      return values.subarray(1).map((value, i) => 400 * Math.log(value / values[i]!));
    };
    const rate = readColumn(rows, 'realint').subarray(0, 202);
    const input = buildInput({ gdp: grow('realgdp'), rate, '(Intercept)': buildOnes(202) }, grow('realinv'));
    const fit = fitLeastSquares(input);
    const published = [4.3742217, -0.613997, -9.4816728];
    fit.coefficients.forEach((b, j) => expect(b).toBeCloseTo(published[j]!, 6));
    const robust = computeStandardErrors(computeNeweyWestCovariance(input, fit, { lag: 4, isAdjusted: true }), 3);
    [0.3312564, 0.2958235, 1.1859338].forEach((error, j) => expect(robust[j]).toBeCloseTo(error, 6));
    const white = computeStandardErrors(computeHeteroskedasticCovariance(input, fit, 'HC1'), 3);
    [0.3235545, 0.3277284, 1.3690593].forEach((error, j) => expect(white[j]).toBeCloseTo(error, 6));
  });

  it('is HC0 at lag 0', () => {
    const input = buildInput({ '(Intercept)': buildOnes(5), x: [1, 2, 4, 3, 7] }, Float64Array.of(1, 3, 2, 5, 4));
    const fit = fitLeastSquares(input);
    expect([...computeNeweyWestCovariance(input, fit, { lag: 0 })]).toEqual([
      ...computeHeteroskedasticCovariance(input, fit, 'HC0'),
    ]);
  });
});

describe('smearing', () => {
  it('has Duan’s factor and the lognormal one', () => {
    // Source: Duan 1983, recomputed: e = {−0.5, 0, 0.5}: 1.085084; lognormal 1.086904 (÷ n), 1.133148 (÷ n − 1).
    expect(computeSmearingFactor([-0.5, 0, 0.5])).toBeCloseTo(1.085084, 6);
    expect(computeLognormalFactor(Math.sqrt(0.5 / 3))).toBeCloseTo(1.086904, 6);
    expect(computeLognormalFactor(Math.sqrt(0.5 / 2))).toBeCloseTo(1.133148, 6);
  });

  it('weighs its residuals', () => {
    expect(computeSmearingFactor([0, Math.LN2], [3, 1])).toBeCloseTo(1.25, 14);
  });

  it('refuses no residuals and weights of 0', () => {
    expect(() => computeSmearingFactor([])).toThrow(InvalidInputError);
    expect(() => computeSmearingFactor([1], [0])).toThrow(InvalidInputError);
    expect(() => computeSmearingFactor([NaN])).toThrow('residual 1');
  });
});

describe('the classical covariance of a penalised fit', () => {
  it('is σ²·(XᵀX + Λ)⁻¹', () => {
    // By hand: one column, Σx² = 14, λ = 6, b = 0.7, residuals 0.3·(1, 2, 3): RSS 1.26; degrees 3 − 0.7.
    const input = { ...buildInput({ x: [1, 2, 3] }, Float64Array.of(1, 2, 3)), penalties: Float64Array.of(6) };
    const covariance = computeClassicalCovariance(input, fitLeastSquares(input));
    expect(covariance[0]).toBeCloseTo(1.26 / 2.3 / 20, 14);
  });
});

import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { InvalidInputError, NonFiniteInputError, TooFewRowsError } from '../../../../shared/statistics/errors.ts';
import {
  buildNormalEquations,
  fitLeastSquaresFast,
  fitSpecification,
} from '../../../../shared/statistics/regression/fast-least-squares.ts';
import { fitLeastSquares } from '../../../../shared/statistics/regression/least-squares.ts';
import type { LeastSquaresInput } from '../../../../shared/statistics/regression/types.ts';
import { buildInput, buildNistInput, buildOnes, readNistSets } from '../../../reference/build-designs.ts';
import { countWorstDigits } from '../../../reference/read-reference.ts';

/** Thousandths, so that a column is either dependent or far from the tolerance of the rank, where a rounding error would decide. */
const value = fc.integer({ min: -5000, max: 5000 }).map((thousandths) => thousandths / 1000);
const size = fc.record({ columns: fc.integer({ min: 1, max: 7 }), extraRows: fc.integer({ min: 3, max: 25 }) });

/** Weighted, partly penalised problems, some with copies or near copies of columns and with very different column sizes. */
const problem = size
  .chain(({ columns, extraRows }) => {
    const rows = columns + extraRows;
    return fc.record({
      rows: fc.constant(rows),
      columns: fc.constant(columns),
      design: fc.array(value, { minLength: rows * columns, maxLength: rows * columns }),
      response: fc.array(value, { minLength: rows, maxLength: rows }),
      weights: fc.option(fc.array(fc.double({ min: 0.1, max: 4, noNaN: true }), { minLength: rows, maxLength: rows })),
      penalties: fc.option(
        fc.array(fc.oneof(fc.constant(0), fc.double({ min: 0.01, max: 50, noNaN: true })), {
          minLength: columns,
          maxLength: columns,
        }),
      ),
      exponents: fc.array(fc.integer({ min: -6, max: 6 }), { minLength: columns, maxLength: columns }),
      nearness: fc.option(fc.constantFrom(0, 1e-12, 1e-6, 1e-3)),
    });
  })
  .map(({ rows, columns, design, response, weights, penalties, exponents, nearness }): LeastSquaresInput => {
    const matrix = Float64Array.from(design, (x, k) => (k % columns === 0 ? 1 : x));
    for (let i = 0; i < rows; i++) {
      const last = i * columns + columns - 1;
      if (nearness !== null && columns > 2) matrix[last] = matrix[i * columns + 1]! + nearness * matrix[last]!;
      for (let j = 0; j < columns; j++) matrix[i * columns + j]! *= 10 ** exponents[j]!;
    }
    return {
      rows,
      columns,
      design: matrix,
      response: Float64Array.from(response),
      weights: weights ? Float64Array.from(weights) : undefined,
      penalties: penalties ? Float64Array.from(penalties, (penalty, j) => penalty * 100 ** exponents[j]!) : undefined,
    };
  });

describe('the fast kernel', () => {
  it('agrees with Householder QR on fitted values, leverages, residual sum and rank', () => {
    fc.assert(
      fc.property(problem, (input) => {
        const slow = fitLeastSquares(input);
        const fast = fitLeastSquaresFast(input, true);
        expect(fast.rank).toBe(slow.rank);
        expect(fast.kept).toEqual(slow.kept);
        expect(fast.dropped).toEqual(slow.dropped);
        const scale = Math.hypot(...input.response) + 1e-6;
        for (let i = 0; i < input.rows; i++) {
          expect(Math.abs(fast.fitted[i]! - slow.fitted[i]!)).toBeLessThanOrEqual(1e-9 * scale);
          expect(Math.abs(fast.hatDiagonal![i]! - slow.hatDiagonal[i]!)).toBeLessThanOrEqual(1e-7);
        }
        expect(Math.abs(fast.residualSumOfSquares - slow.residualSumOfSquares)).toBeLessThanOrEqual(
          1e-9 * scale * scale,
        );
      }),
      { numRuns: 400 },
    );
  });

  it('agrees with Householder QR on each coefficient where Cholesky answers', () => {
    let answered = 0;
    fc.assert(
      fc.property(problem, (input) => {
        const fast = fitLeastSquaresFast(input);
        if (fast.isFromQr) return;
        answered++;
        const slow = fitLeastSquares(input);
        const response = Math.hypot(...input.response) + 1e-6;
        for (let j = 0; j < input.columns; j++) {
          let length = 0;
          for (let i = 0; i < input.rows; i++) length = Math.hypot(length, input.design[i * input.columns + j]!);
          const gap = Math.abs(fast.coefficients[j]! - slow.coefficients[j]!) * length;
          expect(gap).toBeLessThanOrEqual(1e-8 * response);
        }
        expect(fast.factorR.length).toBe(slow.factorR.length);
        for (let a = 0; a < fast.rank; a++) {
          for (let b = a; b < fast.rank; b++) {
            const k = a * fast.rank + b;
            let column = 0;
            for (let r = 0; r <= b; r++) column = Math.hypot(column, slow.factorR[r * fast.rank + b]!);
            // Cholesky's diagonal is positive; Householder's rows may be mirrored.
            const sign = Math.sign(slow.factorR[a * fast.rank + a]!);
            expect(Math.abs(fast.factorR[k]! - sign * slow.factorR[k]!)).toBeLessThanOrEqual(1e-8 * column);
          }
        }
      }),
      { numRuns: 400 },
    );
    expect(answered).toBeGreaterThan(100);
  });

  it('fits a subset of columns as if the others were not there', () => {
    fc.assert(
      fc.property(problem, fc.array(fc.boolean(), { minLength: 7, maxLength: 7 }), (input, chosen) => {
        const columns = Array.from({ length: input.columns }, (_, j) => j).filter((j) => j === 0 || chosen[j]);
        const fast = fitSpecification(buildNormalEquations(input), { columns });
        const design = new Float64Array(input.rows * columns.length);
        for (let i = 0; i < input.rows; i++) {
          columns.forEach((j, k) => {
            design[i * columns.length + k] = input.design[i * input.columns + j]!;
          });
        }
        const penalties = input.penalties && Float64Array.from(columns, (j) => input.penalties![j]!);
        const alone = fitLeastSquares({ ...input, design, columns: columns.length, penalties });
        expect(fast.kept).toEqual(alone.kept.map((k) => columns[k]!));
        expect(fast.dropped).toEqual(alone.dropped.map((k) => columns[k]!));
        const scale = Math.hypot(...input.response) + 1e-6;
        for (let i = 0; i < input.rows; i++) {
          expect(Math.abs(fast.fitted[i]! - alone.fitted[i]!)).toBeLessThanOrEqual(1e-9 * scale);
        }
      }),
    );
  });

  it('hands Longley, Filip and the Wampler sets to Householder QR', () => {
    for (const set of readNistSets()) {
      if (!/Longley|Filip|Wampler/.test(set.name)) continue;
      const input = buildNistInput(set);
      const fast = fitLeastSquaresFast(input);
      expect(fast.isFromQr).toBe(true);
      expect(fast.coefficients).toEqual(fitLeastSquares(input).coefficients);
    }
  });

  it.each([
    ['Norris', 12],
    ['Pontius', 11.5],
    ['NoInt1', 14],
    ['NoInt2', 14],
  ] as const)('keeps %s to %d digits', (name, digits) => {
    // Certified values: NIST/ITL StRD.
    const set = readNistSets().find((candidate) => candidate.name === name)!;
    const fit = fitLeastSquaresFast(buildNistInput(set));
    const worst = countWorstDigits(
      fit.coefficients.map((coefficient) => coefficient!),
      set.parameters.map((parameter) => parameter.estimate),
    );
    expect(worst).toBeGreaterThanOrEqual(digits);
  });

  it('drops the column that Householder QR drops', () => {
    const x = [1, 2, 3, 4, 6];
    const input = buildInput(
      { '(Intercept)': buildOnes(5), x, twice: x.map((a) => 2 * a) },
      Float64Array.of(1, 2, 2, 5, 6),
    );
    const fit = fitLeastSquaresFast(input);
    expect(fit.isFromQr).toBe(true);
    expect(fit.dropped).toEqual([2]);
    expect(fit.coefficients[2]).toBeNull();
  });

  it('takes other penalties for the same normal equations', () => {
    const input = buildInput({ x: [1, 2, 3] }, Float64Array.of(1, 2, 3));
    const equations = buildNormalEquations(input);
    expect(fitSpecification(equations).coefficients[0]).toBeCloseTo(1, 14);
    // b = 14 / (14 + 6), by hand.
    expect(fitSpecification(equations, { penalties: Float64Array.of(6) }).coefficients[0]).toBeCloseTo(0.7, 14);
  });

  it('refuses too few rows, NaN and columns that are no subset', () => {
    const square = buildInput({ '(Intercept)': [1, 1], x: [1, 2] }, Float64Array.of(1, 2));
    expect(() => fitLeastSquaresFast(square)).toThrow(TooFewRowsError);
    const broken = buildInput({ x: [1, NaN, 3] }, Float64Array.of(1, 2, 4));
    expect(() => buildNormalEquations(broken)).toThrow(NonFiniteInputError);
    const equations = buildNormalEquations(buildInput({ x: [1, 2, 3], z: [1, 0, 0] }, Float64Array.of(1, 2, 4)));
    for (const columns of [[], [1, 0], [0, 0], [2], [0.5]]) {
      expect(() => fitSpecification(equations, { columns })).toThrow(InvalidInputError);
    }
  });
});

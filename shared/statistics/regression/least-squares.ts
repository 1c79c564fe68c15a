import { Matrix } from 'ml-matrix';
import MultivariateLinearRegression from 'ml-regression-multivariate-linear';
import { TooFewRowsError } from '../errors.ts';
import { sumProductsAccurately } from '../matrix/double-double.ts';
import { factorHouseholder, type HouseholderQr } from '../matrix/householder-qr.ts';
import { solveUpper, solveUpperTransposed } from '../matrix/triangular.ts';
import { checkLeastSquaresInput, countWeightedRows } from './input-check.ts';
import type { LeastSquaresFit, LeastSquaresInput } from './types.ts';

const refinementRounds = 3;

/** √w·X above the penalty rows √λ·I, column-major. */
function augmentDesign(input: LeastSquaresInput, penalised: readonly number[]): Float64Array {
  const { design, rows, columns, weights, penalties } = input;
  const height = rows + penalised.length;
  const augmented = new Float64Array(height * columns);
  for (let i = 0; i < rows; i++) {
    const root = weights ? Math.sqrt(weights[i]!) : 1;
    for (let j = 0; j < columns; j++) augmented[j * height + i] = root * design[i * columns + j]!;
  }
  penalised.forEach((j, k) => {
    augmented[j * height + rows + k] = Math.sqrt(penalties![j]!);
  });
  return augmented;
}

/** Qᵀy by the regression package, which meets a perfectly conditioned problem in an orthonormal Q. */
function estimateEffects(factorQ: Float64Array, rows: number, rank: number, response: Float64Array): Float64Array {
  const orthonormal = new Matrix(rows, rank);
  for (let i = 0; i < rows; i++) {
    for (let j = 0; j < rank; j++) orthonormal.set(i, j, factorQ[j * rows + i]!);
  }
  const regression = new MultivariateLinearRegression(orthonormal, Matrix.columnVector(response), {
    intercept: false,
    statistics: false,
  });
  return Float64Array.from(regression.weights, (row) => row[0]!);
}

/**
 * Solves R·b = effects and improves b and the residuals together on the augmented system [I A; Aᵀ 0], its remainders summed in twice
 * the working precision (Björck 1967, Iterative refinement of linear least squares solutions). On Wampler4 and Wampler5, whose
 * noise is up to 10⁶ times the signal, this lifts the worst coefficient from 7.8 and 5.8 correct digits to 13 and more.
 */
function refineSolution(
  augmented: Float64Array,
  target: Float64Array,
  effects: Float64Array,
  factorisation: HouseholderQr,
): { solution: Float64Array; remainder: Float64Array } {
  const { rank, kept, factorQ, factorR, rows: height } = factorisation;
  const solution = solveUpper(factorR, rank, effects);
  const remainder = target.slice();
  for (let k = 0; k < rank; k++) {
    for (let i = 0; i < height; i++) remainder[i]! -= factorQ[k * height + i]! * effects[k]!;
  }
  const packed = packRows(augmented, height, kept);
  const negated = new Float64Array(rank);
  const rowGap = new Float64Array(height);
  let previous = Infinity;
  for (let round = 0; round < refinementRounds; round++) {
    for (let k = 0; k < rank; k++) negated[k] = -solution[k]!;
    for (let i = 0; i < height; i++) {
      const y = target[i]!;
      const r = remainder[i]!;
      const gap = y - r;
      const part = gap - y;
      const gapLow = y - (gap - part) - (r + part);
      rowGap[i] = sumProductsAccurately(packed, i * rank, 1, negated, 0, rank, gap, gapLow);
    }
    const columnGap = Float64Array.from(kept, (j) =>
      sumProductsAccurately(augmented, j * height, 1, remainder, 0, height),
    );
    const pulled = solveUpperTransposed(factorR, rank, columnGap);
    const shift = new Float64Array(rank);
    for (let k = 0; k < rank; k++) {
      let sum = pulled[k]!;
      for (let i = 0; i < height; i++) sum += factorQ[k * height + i]! * rowGap[i]!;
      shift[k] = sum;
    }
    const step = Math.hypot(...shift);
    if (!(step < previous / 2)) break;
    previous = step;
    const change = solveUpper(factorR, rank, shift);
    for (let k = 0; k < rank; k++) {
      solution[k]! += change[k]!;
      for (let i = 0; i < height; i++) rowGap[i]! -= factorQ[k * height + i]! * shift[k]!;
    }
    for (let i = 0; i < height; i++) remainder[i]! += rowGap[i]!;
    if (step <= Number.EPSILON * Math.hypot(...effects)) break;
  }
  return { solution, remainder };
}

/** The kept columns of a column-major matrix as rows of their own, so that a row is read in one sweep. */
function packRows(matrix: Float64Array, height: number, kept: readonly number[]): Float64Array {
  const packed = new Float64Array(height * kept.length);
  kept.forEach((j, k) => {
    for (let i = 0; i < height; i++) packed[i * kept.length + k] = matrix[j * height + i]!;
  });
  return packed;
}

/**
 * Weighted, optionally penalised least squares: minimises Σ w·(y − x'b)² + Σ λ·b² by Householder QR; forming XᵀX would square the
 * condition number. The orthonormal Q goes to ml-regression-multivariate-linear for the effects Qᵀy, and R·b = Qᵀy is solved back.
 *
 * design n × p, row-major; response n values. A column that depends on earlier ones (see householder-qr.ts) gets the coefficient
 * null and stands in `dropped`; its name is in the input. Rows of weight 0 take no part but get a fitted value.
 * Throws TooFewRowsError if the rows of positive weight and the penalty rows together are not more than the rank,
 * NonFiniteInputError for NaN or ±∞, InvalidInputError for lengths that don't fit and for negative weights or penalties.
 * Checked against NIST StRD (tests/reference/nist) and R's lm.
 */
export function fitLeastSquares(input: LeastSquaresInput): LeastSquaresFit {
  checkLeastSquaresInput(input);
  const { design, rows, columns, response, weights, penalties } = input;
  const penalised: number[] = [];
  penalties?.forEach((penalty, j) => {
    if (penalty > 0) penalised.push(j);
  });
  const height = rows + penalised.length;
  const augmented = augmentDesign(input, penalised);
  const factorisation = factorHouseholder(augmented, height, columns);
  const { rank, kept, dropped, factorR, factorQ } = factorisation;
  const weightedRows = countWeightedRows(input);
  if (weightedRows + penalised.length <= rank) {
    throw new TooFewRowsError(weightedRows, rank - penalised.length + 1);
  }

  const target = new Float64Array(height);
  for (let i = 0; i < rows; i++) target[i] = (weights ? Math.sqrt(weights[i]!) : 1) * response[i]!;
  const effects = rank > 0 ? estimateEffects(factorQ, height, rank, target) : new Float64Array(0);
  const { solution, remainder } = refineSolution(augmented, target, effects, factorisation);
  const coefficients: (number | null)[] = Array.from({ length: columns }, () => null);
  kept.forEach((j, k) => {
    coefficients[j] = solution[k]!;
  });
  const hatDiagonal = new Float64Array(rows);
  for (let k = 0; k < rank; k++) {
    const start = k * height;
    for (let i = 0; i < rows; i++) {
      const q = factorQ[start + i]!;
      hatDiagonal[i]! += q * q;
    }
  }
  const fitted = new Float64Array(rows);
  const residuals = new Float64Array(rows);
  let residualSumOfSquares = 0;
  for (let i = 0; i < rows; i++) {
    if (hatDiagonal[i]! > 1) hatDiagonal[i] = 1;
    const root = weights ? Math.sqrt(weights[i]!) : 1;
    if (root > 0) {
      residuals[i] = remainder[i]! / root;
      fitted[i] = response[i]! - residuals[i]!;
      residualSumOfSquares += remainder[i]! * remainder[i]!;
    } else {
      let value = 0;
      kept.forEach((j, k) => {
        value += design[i * columns + j]! * solution[k]!;
      });
      fitted[i] = value;
      residuals[i] = response[i]! - value;
    }
  }
  return { coefficients, rank, kept, dropped, factorR, fitted, residuals, hatDiagonal, residualSumOfSquares };
}

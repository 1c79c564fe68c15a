import { Matrix } from 'ml-matrix';
import MultivariateLinearRegression from 'ml-regression-multivariate-linear';
import { TooFewRowsError } from '../errors.ts';
import { factorHouseholder } from '../matrix/householder-qr.ts';
import { solveUpper } from '../matrix/triangular.ts';
import { checkLeastSquaresInput, countWeightedRows } from './input-check.ts';
import type { LeastSquaresFit, LeastSquaresInput } from './types.ts';

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
  const { rank, kept, dropped, factorR, factorQ } = factorHouseholder(augmentDesign(input, penalised), height, columns);
  const weightedRows = countWeightedRows(input);
  if (weightedRows + penalised.length <= rank) {
    throw new TooFewRowsError(weightedRows, rank - penalised.length + 1);
  }

  const target = new Float64Array(height);
  for (let i = 0; i < rows; i++) target[i] = (weights ? Math.sqrt(weights[i]!) : 1) * response[i]!;
  const effects = rank > 0 ? estimateEffects(factorQ, height, rank, target) : new Float64Array(0);
  const solution = solveUpper(factorR, rank, effects);
  const coefficients: (number | null)[] = Array.from({ length: columns }, () => null);
  kept.forEach((j, k) => {
    coefficients[j] = solution[k]!;
  });

  // Projected residuals: free of the coefficients' own rounding, which on near-collinear columns is far larger.
  const remainder = target.slice();
  const hatDiagonal = new Float64Array(rows);
  for (let k = 0; k < rank; k++) {
    const effect = effects[k]!;
    const start = k * height;
    for (let i = 0; i < rows; i++) {
      const q = factorQ[start + i]!;
      remainder[i]! -= q * effect;
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

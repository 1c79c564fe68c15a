import { Matrix, SingularValueDecomposition } from 'ml-matrix';
import { InvalidInputError, SingularMatrixError, TooFewRowsError } from '../errors.ts';

export interface RidgeProblem {
  rows: number;
  columns: number;
  means: Float64Array;
  /** Root mean square of each centred column (divisor n). */
  deviations: Float64Array;
  responseMean: number;
  responseSquares: number;
  singularValues: Float64Array;
  /** columns × columns, column k belongs to singular value k. */
  rightVectors: Matrix;
  /** Uᵀy. */
  projections: Float64Array;
}

/**
 * Centres and scales predictors (rows × columns, row-major, without intercept) to root mean square 1 and decomposes them once for every λ,
 * as R's MASS::lm.ridge does. Throws SingularMatrixError for a constant column, TooFewRowsError if rows ≤ columns + 1.
 */
export function prepareRidge(
  predictors: Float64Array,
  rows: number,
  columns: number,
  response: Float64Array,
): RidgeProblem {
  if (predictors.length !== rows * columns || response.length !== rows) {
    throw new InvalidInputError(`predictors are not ${rows} × ${columns} or the response not ${rows} long`);
  }
  if (rows <= columns + 1) throw new TooFewRowsError(rows, columns + 2);
  const means = new Float64Array(columns);
  const deviations = new Float64Array(columns);
  const standardised = new Matrix(rows, columns);
  for (let j = 0; j < columns; j++) {
    let sum = 0;
    for (let i = 0; i < rows; i++) sum += predictors[i * columns + j]!;
    const mean = sum / rows;
    let squares = 0;
    for (let i = 0; i < rows; i++) squares += (predictors[i * columns + j]! - mean) ** 2;
    const deviation = Math.sqrt(squares / rows);
    if (!(deviation > 1e-12 * Math.abs(mean)) || deviation === 0) {
      throw new SingularMatrixError(`predictor ${j + 1} is constant`);
    }
    means[j] = mean;
    deviations[j] = deviation;
    for (let i = 0; i < rows; i++) standardised.set(i, j, (predictors[i * columns + j]! - mean) / deviation);
  }
  const responseMean = response.reduce((sum, value) => sum + value, 0) / rows;
  const responseSquares = response.reduce((sum, value) => sum + (value - responseMean) ** 2, 0);
  const decomposition = new SingularValueDecomposition(standardised);
  const left = decomposition.leftSingularVectors;
  const projections = Float64Array.from({ length: columns }, (_, k) => {
    let sum = 0;
    for (let i = 0; i < rows; i++) sum += left.get(i, k) * (response[i]! - responseMean);
    return sum;
  });
  return {
    rows,
    columns,
    means,
    deviations,
    responseMean,
    responseSquares,
    singularValues: Float64Array.from(decomposition.diagonal),
    rightVectors: decomposition.rightSingularVectors,
    projections,
  };
}

export interface RidgeFit {
  /** On the original scale of the predictors. */
  coefficients: Float64Array;
  intercept: number;
  effectiveDegrees: number;
  residualSumOfSquares: number;
  /** Generalised cross-validation RSS / (n − Σ d² / (d² + λ))² (Golub, Heath & Wahba 1979). */
  gcv: number;
}

/** Ridge coefficients at λ ≥ 0 on standardised predictors. Checked against R's MASS::lm.ridge. */
export function solveRidge(problem: RidgeProblem, lambda: number): RidgeFit {
  if (!(lambda >= 0)) throw new InvalidInputError('λ must not be negative');
  const { columns, singularValues, projections, rightVectors, deviations, means } = problem;
  const standardised = new Float64Array(columns);
  let effectiveDegrees = 0;
  let explained = 0;
  let projected = 0;
  for (let k = 0; k < columns; k++) {
    const d = singularValues[k]!;
    const shrinkage = (d * d) / (d * d + lambda);
    effectiveDegrees += shrinkage;
    const z = projections[k]!;
    projected += z * z;
    explained += (z * (1 - shrinkage)) ** 2;
    for (let j = 0; j < columns; j++) standardised[j]! += (rightVectors.get(j, k) * z * shrinkage) / d;
  }
  const residualSumOfSquares = problem.responseSquares - projected + explained;
  const coefficients = standardised.map((value, j) => value / deviations[j]!);
  let intercept = problem.responseMean;
  for (let j = 0; j < columns; j++) intercept -= coefficients[j]! * means[j]!;
  return {
    coefficients,
    intercept,
    effectiveDegrees,
    residualSumOfSquares,
    gcv: residualSumOfSquares / (problem.rows - effectiveDegrees) ** 2,
  };
}

/**
 * The two closed-form choices of λ: Hoerl, Kennard & Baldwin 1975, (p − 2)·s² / Σb², and Lawless & Wang 1976, (p − 2)·s²·n / Σŷ², b and ŷ from
 * least squares on standardised predictors, with p − 2 as in Venables & Ripley, Modern Applied Statistics with S. Needs at least 3 predictors.
 */
export function chooseRidgePenalty(problem: RidgeProblem): { hoerlKennardBaldwin: number; lawlessWang: number } {
  const { rows, columns, singularValues, projections } = problem;
  if (columns < 3) throw new InvalidInputError('these choices of λ need at least 3 predictors');
  let coefficientSquares = 0;
  let fittedSquares = 0;
  for (let k = 0; k < columns; k++) {
    coefficientSquares += (projections[k]! / singularValues[k]!) ** 2;
    fittedSquares += projections[k]! ** 2;
  }
  const variance = (problem.responseSquares - fittedSquares) / (rows - columns - 1);
  return {
    hoerlKennardBaldwin: ((columns - 2) * variance) / coefficientSquares,
    lawlessWang: ((columns - 2) * variance * rows) / fittedSquares,
  };
}

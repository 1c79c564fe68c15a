import { solveUpper, solveUpperTransposed } from './triangular.ts';

/**
 * Upper triangle U with UᵀU = A of a symmetric matrix, size × size, row-major; null as soon as a pivot is not above
 * `smallestPivot` times its own diagonal entry. Source: Golub & Van Loan, Matrix Computations, 4th ed., algorithm 4.2.2.
 */
export function factorCholesky(symmetric: Float64Array, size: number, smallestPivot: number): Float64Array | null {
  const upper = new Float64Array(size * size);
  for (let i = 0; i < size; i++) {
    const row = i * size;
    for (let j = i; j < size; j++) upper[row + j] = symmetric[row + j]!;
    for (let k = 0; k < i; k++) {
      const factor = upper[k * size + i]!;
      if (factor === 0) continue;
      for (let j = i; j < size; j++) upper[row + j]! -= factor * upper[k * size + j]!;
    }
    const pivot = upper[row + i]!;
    if (!(pivot > smallestPivot * symmetric[row + i]!)) return null;
    const root = Math.sqrt(pivot);
    for (let j = i; j < size; j++) upper[row + j]! /= root;
  }
  return upper;
}

/** Solves UᵀU·x = b. */
export function solveCholesky(upper: Float64Array, size: number, right: ArrayLike<number>): Float64Array {
  return solveUpper(upper, size, solveUpperTransposed(upper, size, right));
}

/**
 * Estimate, from below and seldom off by more than 3, of the 1-norm condition number of A = UᵀU.
 * Source: Hager 1984, Condition estimates; Higham 2002, Accuracy and Stability of Numerical Algorithms, algorithm 15.1.
 */
export function estimateCondition(symmetric: Float64Array, upper: Float64Array, size: number): number {
  let norm = 0;
  for (let i = 0; i < size; i++) {
    let sum = 0;
    for (let j = 0; j < size; j++) sum += Math.abs(symmetric[i * size + j]!);
    norm = Math.max(norm, sum);
  }
  let probe = new Float64Array(size).fill(1 / size);
  let inverseNorm = 0;
  for (let round = 0; round < 5; round++) {
    const answer = solveCholesky(upper, size, probe);
    let length = 0;
    for (const value of answer) length += Math.abs(value);
    if (length <= inverseNorm) break;
    inverseNorm = length;
    const slope = solveCholesky(
      upper,
      size,
      answer.map((value) => (value < 0 ? -1 : 1)),
    );
    let steepest = 0;
    let along = 0;
    for (let j = 0; j < size; j++) {
      along += slope[j]! * probe[j]!;
      if (Math.abs(slope[j]!) > Math.abs(slope[steepest]!)) steepest = j;
    }
    if (Math.abs(slope[steepest]!) <= along) break;
    probe = new Float64Array(size);
    probe[steepest] = 1;
  }
  return norm * inverseNorm;
}

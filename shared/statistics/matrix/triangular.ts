import { SingularMatrixError } from '../errors.ts';

/** Solves U·x = b by back-substitution. upper: size × size, row-major, only its upper triangle is read. */
export function solveUpper(upper: Float64Array, size: number, right: ArrayLike<number>): Float64Array {
  const solution = Float64Array.from(right);
  for (let i = size - 1; i >= 0; i--) {
    let sum = solution[i]!;
    for (let j = i + 1; j < size; j++) sum -= upper[i * size + j]! * solution[j]!;
    const pivot = upper[i * size + i]!;
    if (pivot === 0) throw new SingularMatrixError('the triangle has a zero on its diagonal');
    solution[i] = sum / pivot;
  }
  return solution;
}

/** Solves Uᵀ·x = b by forward substitution. upper: size × size, row-major, only its upper triangle is read. */
export function solveUpperTransposed(upper: Float64Array, size: number, right: ArrayLike<number>): Float64Array {
  const solution = Float64Array.from(right);
  for (let i = 0; i < size; i++) {
    const pivot = upper[i * size + i]!;
    if (pivot === 0) throw new SingularMatrixError('the triangle has a zero on its diagonal');
    const value = solution[i]! / pivot;
    solution[i] = value;
    for (let j = i + 1; j < size; j++) solution[j]! -= upper[i * size + j]! * value;
  }
  return solution;
}

/** Inverse of an upper triangle, itself upper triangular; size × size, row-major. */
export function invertUpper(upper: Float64Array, size: number): Float64Array {
  const inverse = new Float64Array(size * size);
  for (let i = size - 1; i >= 0; i--) {
    const pivot = upper[i * size + i]!;
    if (pivot === 0) throw new SingularMatrixError('the triangle has a zero on its diagonal');
    const row = i * size;
    for (let k = i + 1; k < size; k++) {
      const factor = upper[row + k]!;
      if (factor === 0) continue;
      for (let j = k; j < size; j++) inverse[row + j]! -= factor * inverse[k * size + j]!;
    }
    for (let j = i + 1; j < size; j++) inverse[row + j]! /= pivot;
    inverse[row + i] = 1 / pivot;
  }
  return inverse;
}

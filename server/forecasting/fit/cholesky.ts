/**
 * Lower Cholesky factor of a symmetric positive definite matrix, in place of its lower triangle; n × n, row-major.
 * A pivot below `1e-12` of its diagonal is lifted to it, so a nearly aliased direction gets no size instead of an infinite one.
 */
export function factorCholesky(matrix: Float64Array, n: number): void {
  for (let i = 0; i < n; i++) {
    const rowI = i * n;
    for (let j = 0; j <= i; j++) {
      const rowJ = j * n;
      let s0 = 0;
      let s1 = 0;
      let k = 0;
      for (; k + 1 < j; k += 2) {
        s0 += matrix[rowI + k]! * matrix[rowJ + k]!;
        s1 += matrix[rowI + k + 1]! * matrix[rowJ + k + 1]!;
      }
      if (k < j) s0 += matrix[rowI + k]! * matrix[rowJ + k]!;
      const rest = matrix[rowI + j]! - s0 - s1;
      if (i === j) {
        const floor = 1e-12 * Math.abs(matrix[rowI + i]!) + 1e-300;
        matrix[rowI + i] = Math.sqrt(Math.max(rest, floor));
      } else {
        matrix[rowI + j] = rest / matrix[rowJ + j]!;
      }
    }
  }
}

/** Solves L·Lᵀ·x = b in place. */
export function solveCholesky(factor: Float64Array, n: number, b: Float64Array): void {
  for (let i = 0; i < n; i++) {
    let sum = b[i]!;
    const row = i * n;
    for (let k = 0; k < i; k++) sum -= factor[row + k]! * b[k]!;
    b[i] = sum / factor[row + i]!;
  }
  solveLowerTransposed(factor, n, b);
}

/** Solves Lᵀ·x = b in place. */
export function solveLowerTransposed(factor: Float64Array, n: number, b: Float64Array): void {
  for (let i = n - 1; i >= 0; i--) {
    const value = b[i]! / factor[i * n + i]!;
    b[i] = value;
    const row = i * n;
    for (let k = 0; k < i; k++) b[k]! -= factor[row + k]! * value;
  }
}

/** Inverse of L, lower triangle, n × n row-major; the variances of L·Lᵀ's inverse are its columns' squared lengths. */
export function invertLower(factor: Float64Array, n: number): Float64Array {
  const inverse = new Float64Array(n * n);
  for (let i = 0; i < n; i++) {
    const pivot = 1 / factor[i * n + i]!;
    for (let k = 0; k < i; k++) {
      const value = factor[i * n + k]!;
      if (value === 0) continue;
      for (let j = 0; j <= k; j++) inverse[i * n + j]! -= value * inverse[k * n + j]!;
    }
    for (let j = 0; j < i; j++) inverse[i * n + j]! *= pivot;
    inverse[i * n + i] = pivot;
  }
  return inverse;
}

import { InvalidInputError } from '../errors.ts';

/** Relative size of a diagonal of R, on columns of unit length, below which a column counts as dependent. */
export const rankTolerance = 1e-10;

export interface HouseholderQr {
  rows: number;
  columns: number;
  rank: number;
  /** Column indices that were kept, ascending, and those that depend on earlier kept ones. */
  kept: readonly number[];
  dropped: readonly number[];
  /** rank × rank upper triangle on the original column scale, row-major. */
  factorR: Float64Array;
  /** rows × rank, column-major, orthonormal columns. */
  factorQ: Float64Array;
}

/** Largest power of two that is not above a positive number: scaling by it is exact. */
function floorPowerOfTwo(value: number): number {
  let power = 2 ** Math.floor(Math.log2(value));
  if (power > value) power /= 2;
  return power;
}

function columnLength(values: Float64Array, start: number, end: number): number {
  let largest = 0;
  for (let i = start; i < end; i++) largest = Math.max(largest, Math.abs(values[i]!));
  if (largest === 0 || !Number.isFinite(largest)) return largest;
  const scale = floorPowerOfTwo(largest);
  let sum = 0;
  for (let i = start; i < end; i++) {
    const value = values[i]! / scale;
    sum += value * value;
  }
  return scale * Math.sqrt(sum);
}

/**
 * Applies H = I − β·v·vᵀ to columns `from` … `to − 1` of a column-major target; v lives in rows `top` … of `source` at `vStart`.
 * Four columns share one pass over v (measured: three times as fast as one by one).
 */
function applyReflector(
  source: Float64Array,
  vStart: number,
  beta: number,
  top: number,
  rows: number,
  target: Float64Array,
  from: number,
  to: number,
): void {
  let j = from;
  for (; j + 4 <= to; j += 4) {
    const a = j * rows;
    const b = a + rows;
    const c = b + rows;
    const d = c + rows;
    let sumA = 0;
    let sumB = 0;
    let sumC = 0;
    let sumD = 0;
    for (let i = top; i < rows; i++) {
      const v = source[vStart + i]!;
      sumA += v * target[a + i]!;
      sumB += v * target[b + i]!;
      sumC += v * target[c + i]!;
      sumD += v * target[d + i]!;
    }
    sumA *= beta;
    sumB *= beta;
    sumC *= beta;
    sumD *= beta;
    for (let i = top; i < rows; i++) {
      const v = source[vStart + i]!;
      target[a + i]! -= v * sumA;
      target[b + i]! -= v * sumB;
      target[c + i]! -= v * sumC;
      target[d + i]! -= v * sumD;
    }
  }
  for (; j < to; j++) {
    const a = j * rows;
    let sum = 0;
    for (let i = top; i < rows; i++) sum += source[vStart + i]! * target[a + i]!;
    sum *= beta;
    for (let i = top; i < rows; i++) target[a + i]! -= source[vStart + i]! * sum;
  }
}

/**
 * Householder QR without column exchange, so that earlier columns win: a column whose part orthogonal to the earlier kept ones is
 * shorter than 1e-10 of the largest such part (columns brought to unit length) is dropped.
 * matrix: rows × columns, column-major, left as it is. Columns are scaled by powers of two, which rounds nothing.
 * Source: Golub & Van Loan, Matrix Computations, 4th ed., algorithms 5.1.1, 5.2.1 and 5.1.6 (backward accumulation of Q).
 */
export function factorHouseholder(matrix: Float64Array, rows: number, columns: number): HouseholderQr {
  if (matrix.length !== rows * columns) throw new InvalidInputError(`matrix is not ${rows} × ${columns}`);
  const work = new Float64Array(matrix);
  const scales = new Float64Array(columns);
  const lengths = new Float64Array(columns);
  for (let j = 0; j < columns; j++) {
    const start = j * rows;
    const length = columnLength(work, start, start + rows);
    if (length === 0) continue;
    const scale = floorPowerOfTwo(length);
    scales[j] = scale;
    lengths[j] = length / scale;
    for (let i = start; i < start + rows; i++) work[i]! /= scale;
  }
  const kept: number[] = [];
  const dropped: number[] = [];
  const betas: number[] = [];
  const diagonal: number[] = [];
  let largest = 0;
  for (let j = 0; j < columns; j++) {
    const top = kept.length;
    const start = j * rows;
    const remaining = top < rows ? columnLength(work, start + top, start + rows) : 0;
    const relative = lengths[j]! > 0 ? remaining / lengths[j]! : 0;
    if (relative === 0 || relative <= rankTolerance * largest) {
      dropped.push(j);
      continue;
    }
    largest = Math.max(largest, relative);
    const head = work[start + top]!;
    const alpha = head > 0 ? -remaining : remaining;
    // v = x − α·e₁ and β = 2 / vᵀv = 1 / (α² − α·x₁); α has the sign opposite to x₁, so nothing cancels.
    work[start + top] = head - alpha;
    const beta = 1 / (remaining * remaining - alpha * head);
    applyReflector(work, start, beta, top, rows, work, j + 1, columns);
    kept.push(j);
    betas.push(beta);
    diagonal.push(alpha);
  }
  const rank = kept.length;
  const factorR = new Float64Array(rank * rank);
  for (let c = 0; c < rank; c++) {
    const j = kept[c]!;
    for (let r = 0; r < c; r++) factorR[r * rank + c] = work[j * rows + r]! * scales[j]!;
    factorR[c * rank + c] = diagonal[c]! * scales[j]!;
  }
  const factorQ = new Float64Array(rows * rank);
  for (let k = rank - 1; k >= 0; k--) {
    factorQ[k * rows + k] = 1;
    applyReflector(work, kept[k]! * rows, betas[k]!, k, rows, factorQ, k, rank);
  }
  return { rows, columns, rank, kept, dropped, factorR, factorQ };
}

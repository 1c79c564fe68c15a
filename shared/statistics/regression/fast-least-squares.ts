import { InvalidInputError, TooFewRowsError } from '../errors.ts';
import { estimateCondition, factorCholesky, solveCholesky } from '../matrix/cholesky.ts';
import { invertUpper } from '../matrix/triangular.ts';
import { openTile, tileRows } from '../simd/kernels.ts';
import { checkLeastSquaresInput, checkLeastSquaresShape, countWeightedRows } from './input-check.ts';
import { fitLeastSquares } from './least-squares.ts';
import type { LeastSquaresFit, LeastSquaresInput } from './types.ts';

/**
 * Largest 1-norm condition number of the scaled Gram matrix that Cholesky is trusted with. At 1e8 Wampler4 and Wampler5, whose noise drowns the
 * signal, kept 0.3 digits fewer than Householder QR without refinement; the orange-juice designs stand below 1e5.
 */
const largestCondition = 1e6;
const smallestPivot = 1e-6;

/** The normal equations of one design, from which any subset of its columns is fitted without touching every pair of columns again. */
export interface NormalEquations {
  input: LeastSquaresInput;
  weightedRows: number;
  /** Powers of two that bring each column of √w·X to length 1 … 2 when it is divided by them; 0 for a column of zeros. */
  scales: Float64Array;
  /** XᵀWX of the columns thus divided; columns × columns, row-major. */
  gram: Float64Array;
  /** XᵀWy of the columns thus divided. */
  moments: Float64Array;
}

export interface FastLeastSquaresFit extends Omit<LeastSquaresFit, 'hatDiagonal'> {
  /** Null unless asked for: leverages cost as much again as the Gram matrix. */
  hatDiagonal: Float64Array | null;
  /** Whether the columns were too near to dependence for Cholesky, and Householder QR answered instead. */
  isFromQr: boolean;
}

export interface Specification {
  /** Ascending column indices of the design; all columns if missing. Other columns get a null coefficient and stand in neither `kept` nor `dropped`. */
  columns?: readonly number[];
  /** One penalty per column of the whole design, as in LeastSquaresInput; instead of those of the input. */
  penalties?: Float64Array;
  withLeverages?: boolean;
}

/**
 * Lays rows `from` … of √w·X, and of √w·y as a last column if `response` is given, into a tile, eight rows (a line of the processor's cache) at a time.
 * Rows after the last one become 0.
 */
function fillTile(
  values: Float64Array,
  { design, rows, columns: width, weights }: LeastSquaresInput,
  columns: readonly number[],
  response: Float64Array | null,
  from: number,
): void {
  const size = columns.length;
  const count = Math.min(tileRows, rows - from);
  if (count < tileRows) values.fill(0);
  for (let start = 0; start < count; start += 8) {
    const end = Math.min(count, start + 8);
    for (let k = 0; k < size; k++) {
      const to = k * tileRows;
      for (let r = start, p = (from + start) * width + columns[k]!; r < end; r++, p += width)
        values[to + r] = design[p]!;
    }
    if (response) for (let r = start; r < end; r++) values[size * tileRows + r] = response[from + r]!;
  }
  if (!weights) return;
  const filled = response ? size + 1 : size;
  for (let r = 0; r < count; r++) {
    const root = Math.sqrt(weights[from + r]!);
    for (let k = 0; k < filled; k++) values[k * tileRows + r]! *= root;
  }
}

/** Builds the normal equations of `input` once. Throws as fitLeastSquares does for NaN, ±∞ and lengths that don't fit. */
export function buildNormalEquations(input: LeastSquaresInput): NormalEquations {
  checkLeastSquaresShape(input);
  const { rows, columns, response } = input;
  const all = listAll(columns);
  const tile = openTile(columns + 1);
  for (let from = 0; from < rows; from += tileRows) {
    fillTile(tile.values, input, all, response, from);
    tile.addGram();
  }
  const { square, columns: stride } = tile;
  // A value that isn't finite makes its column's square not finite, so that the values need a look of their own only then.
  for (let j = 0; j <= columns; j++) if (!Number.isFinite(square[j * stride + j])) checkLeastSquaresInput(input);
  const scales = new Float64Array(columns);
  const inverses = new Float64Array(columns);
  for (let j = 0; j < columns; j++) {
    const length = square[j * stride + j]!;
    scales[j] = length > 0 ? 2 ** Math.floor(Math.log2(length) / 2) : 0;
    inverses[j] = length > 0 ? 1 / scales[j]! : 0;
  }
  const gram = new Float64Array(columns * columns);
  const moments = new Float64Array(columns);
  for (let i = 0; i < columns; i++) {
    for (let j = i; j < columns; j++) {
      const product = square[i * stride + j]! * inverses[i]! * inverses[j]!;
      gram[i * columns + j] = product;
      gram[j * columns + i] = product;
    }
    moments[i] = square[i * stride + columns]! * inverses[i]!;
  }
  return { input, weightedRows: countWeightedRows(input), scales, gram, moments };
}

function listAll(columns: number): number[] {
  return Array.from({ length: columns }, (_, j) => j);
}

/** Rows whose residuals and gaps are taken together, while they are in the processor's cache; a multiple of 4. */
const blockRows = 256;

/** Writes y − X·b of rows `from` … `to` to `residuals`, four rows at a time. columns: those of the design that `coefficients` belong to. */
function computeResiduals(
  { design, columns: width, response }: LeastSquaresInput,
  columns: Int32Array,
  coefficients: Float64Array,
  residuals: Float64Array,
  from: number,
  to: number,
): void {
  const size = columns.length;
  let i = from;
  for (; i + 4 <= to; i += 4) {
    const start = i * width;
    let a = 0;
    let b = 0;
    let c = 0;
    let d = 0;
    for (let k = 0; k < size; k++) {
      const at = start + columns[k]!;
      const factor = coefficients[k]!;
      a += design[at]! * factor;
      b += design[at + width]! * factor;
      c += design[at + 2 * width]! * factor;
      d += design[at + 3 * width]! * factor;
    }
    residuals[i] = response[i]! - a;
    residuals[i + 1] = response[i + 1]! - b;
    residuals[i + 2] = response[i + 2]! - c;
    residuals[i + 3] = response[i + 3]! - d;
  }
  for (; i < to; i++) {
    let sum = 0;
    for (let k = 0; k < size; k++) sum += design[i * width + columns[k]!]! * coefficients[k]!;
    residuals[i] = response[i]! - sum;
  }
}

/** Adds XᵀW·e of rows `from` … `to` to `gaps`, four rows at a time. */
function addGaps(
  { design, columns: width, weights }: LeastSquaresInput,
  columns: Int32Array,
  residuals: Float64Array,
  gaps: Float64Array,
  from: number,
  to: number,
): void {
  const size = columns.length;
  const pull = (i: number) => (weights ? residuals[i]! * weights[i]! : residuals[i]!);
  let i = from;
  for (; i + 4 <= to; i += 4) {
    const start = i * width;
    const a = pull(i);
    const b = pull(i + 1);
    const c = pull(i + 2);
    const d = pull(i + 3);
    for (let k = 0; k < size; k++) {
      const at = start + columns[k]!;
      gaps[k]! += design[at]! * a + design[at + width]! * b + design[at + 2 * width]! * c + design[at + 3 * width]! * d;
    }
  }
  for (; i < to; i++) {
    for (let k = 0; k < size; k++) gaps[k]! += design[i * width + columns[k]!]! * pull(i);
  }
}

/** Leverages: squared lengths of the rows of √w·X·U⁻¹, whose columns are orthonormal. */
function computeLeverages(equations: NormalEquations, columns: readonly number[], upper: Float64Array): Float64Array {
  const { input, scales } = equations;
  const { rows } = input;
  const size = columns.length;
  const inverse = invertUpper(upper, size);
  const tile = openTile(size);
  for (let k = 0; k < size; k++) {
    const factor = 1 / scales[columns[k]!]!;
    for (let c = k; c < size; c++) tile.square[k * tile.columns + c] = factor * inverse[k * size + c]!;
  }
  const leverages = new Float64Array(rows);
  for (let from = 0; from < rows; from += tileRows) {
    fillTile(tile.values, input, columns, null, from);
    leverages.set(tile.measureRows().subarray(0, Math.min(tileRows, rows - from)), from);
  }
  for (let i = 0; i < rows; i++) if (leverages[i]! > 1) leverages[i] = 1;
  return leverages;
}

function fitByQr(input: LeastSquaresInput, columns: readonly number[], penalties?: Float64Array): FastLeastSquaresFit {
  const { design, rows, columns: width } = input;
  const size = columns.length;
  const part = new Float64Array(rows * size);
  for (let i = 0; i < rows; i++) {
    for (let k = 0; k < size; k++) part[i * size + k] = design[i * width + columns[k]!]!;
  }
  const fit = fitLeastSquares({
    design: part,
    rows,
    columns: size,
    response: input.response,
    weights: input.weights,
    penalties: penalties && Float64Array.from(columns, (j) => penalties[j]!),
  });
  const coefficients: (number | null)[] = Array.from({ length: width }, () => null);
  fit.coefficients.forEach((value, k) => {
    coefficients[columns[k]!] = value;
  });
  const kept = fit.kept.map((k) => columns[k]!);
  const dropped = fit.dropped.map((k) => columns[k]!);
  return { ...fit, coefficients, kept, dropped, isFromQr: true };
}

/**
 * Fits one specification from the normal equations: Cholesky with one refinement step on the rows themselves; where a pivot or the
 * condition estimate says that this would lose digits, Householder QR (least-squares.ts) answers, so that rank is judged in one place.
 * Coefficients are in the order of the whole design. Throws TooFewRowsError as fitLeastSquares does.
 */
export function fitSpecification(equations: NormalEquations, specification: Specification = {}): FastLeastSquaresFit {
  const { input, gram, moments, scales, weightedRows } = equations;
  const { rows, columns: width, weights, response } = input;
  const penalties = specification.penalties ?? input.penalties;
  const columns = specification.columns ?? listAll(width);
  columns.forEach((j, k) => {
    if (!Number.isInteger(j) || j < 0 || j >= width || (k > 0 && j <= columns[k - 1]!)) {
      throw new InvalidInputError('the columns of a specification must be ascending indices of the design');
    }
  });
  if (columns.length === 0) throw new InvalidInputError('a specification needs at least one column');
  const size = columns.length;
  const penaltyRows = penalties ? columns.filter((j) => penalties[j]! > 0).length : 0;

  const normal = new Float64Array(size * size);
  for (let a = 0; a < size; a++) {
    const row = columns[a]! * width;
    for (let b = 0; b < size; b++) normal[a * size + b] = gram[row + columns[b]!]!;
    const scale = scales[columns[a]!]!;
    const penalty = penalties?.[columns[a]!] ?? 0;
    if (penalty > 0 && scale > 0) normal[a * size + a]! += penalty / (scale * scale);
  }
  const upper = factorCholesky(normal, size, smallestPivot);
  if (upper === null || estimateCondition(normal, upper, size) > largestCondition) {
    return fitByQr(input, columns, penalties);
  }
  if (weightedRows + penaltyRows <= size) throw new TooFewRowsError(weightedRows, size - penaltyRows + 1);

  const solution = solveCholesky(
    upper,
    size,
    columns.map((j) => moments[j]!),
  );
  const listed = Int32Array.from(columns);
  const estimate = new Float64Array(size);
  for (let k = 0; k < size; k++) estimate[k] = solution[k]! / scales[columns[k]!]!;
  const residuals = new Float64Array(rows);
  const gaps = new Float64Array(size);
  for (let from = 0; from < rows; from += blockRows) {
    const to = Math.min(rows, from + blockRows);
    computeResiduals(input, listed, estimate, residuals, from, to);
    addGaps(input, listed, residuals, gaps, from, to);
  }
  for (let k = 0; k < size; k++) {
    const j = columns[k]!;
    gaps[k] = (gaps[k]! - (penalties?.[j] ?? 0) * estimate[k]!) / scales[j]!;
  }
  const change = solveCholesky(upper, size, gaps);

  const coefficients: (number | null)[] = Array.from({ length: width }, () => null);
  const factorR = new Float64Array(size * size);
  for (let k = 0; k < size; k++) {
    const scale = scales[columns[k]!]!;
    estimate[k]! += change[k]! / scale;
    coefficients[columns[k]!] = estimate[k]!;
    for (let r = 0; r <= k; r++) factorR[r * size + k] = upper[r * size + k]! * scale;
  }
  computeResiduals(input, listed, estimate, residuals, 0, rows);
  const fitted = new Float64Array(rows);
  let residualSumOfSquares = 0;
  for (let i = 0; i < rows; i++) {
    const residual = residuals[i]!;
    fitted[i] = response[i]! - residual;
    residualSumOfSquares += (weights ? weights[i]! : 1) * residual * residual;
  }
  return {
    coefficients,
    rank: size,
    kept: columns,
    dropped: [],
    factorR,
    fitted,
    residuals,
    hatDiagonal: specification.withLeverages ? computeLeverages(equations, columns, upper) : null,
    residualSumOfSquares,
    isFromQr: false,
  };
}

/** One fast fit of the whole design; see fitSpecification. */
export function fitLeastSquaresFast(input: LeastSquaresInput, withLeverages = false): FastLeastSquaresFit {
  return fitSpecification(buildNormalEquations(input), { withLeverages });
}

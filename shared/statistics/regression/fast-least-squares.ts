import { InvalidInputError, TooFewRowsError } from '../errors.ts';
import { estimateCondition, factorCholesky, solveCholesky } from '../matrix/cholesky.ts';
import { computeGram } from '../matrix/gram.ts';
import { invertUpper } from '../matrix/triangular.ts';
import { checkLeastSquaresInput, countWeightedRows } from './input-check.ts';
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
  /** √w·X with each column scaled by a power of two to length 1 … 2, column-major. */
  scaledDesign: Float64Array;
  /** What each column was divided by; 0 for a column of zeros. */
  scales: Float64Array;
  /** √w·y. */
  target: Float64Array;
  /** columns × columns, row-major. */
  gram: Float64Array;
  /** Xᵀy on the scaled columns. */
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

/** Builds the normal equations of `input` once. Throws as fitLeastSquares does for NaN, ±∞ and lengths that don't fit. */
export function buildNormalEquations(input: LeastSquaresInput): NormalEquations {
  checkLeastSquaresInput(input);
  const { design, rows, columns, response, weights } = input;
  const scaledDesign = new Float64Array(rows * columns);
  const target = new Float64Array(rows);
  const squares = new Float64Array(columns);
  for (let i = 0; i < rows; i++) {
    const root = weights ? Math.sqrt(weights[i]!) : 1;
    target[i] = root * response[i]!;
    for (let j = 0; j < columns; j++) {
      const value = root * design[i * columns + j]!;
      scaledDesign[j * rows + i] = value;
      squares[j]! += value * value;
    }
  }
  const scales = squares.map((square) => (square > 0 ? 2 ** Math.floor(Math.log2(square) / 2) : 0));
  const moments = new Float64Array(columns);
  for (let j = 0; j < columns; j++) {
    const factor = scales[j]! > 0 ? 1 / scales[j]! : 0;
    let moment = 0;
    for (let i = 0, p = j * rows; i < rows; i++, p++) {
      const value = scaledDesign[p]! * factor;
      scaledDesign[p] = value;
      moment += value * target[i]!;
    }
    moments[j] = moment;
  }
  const gram = computeGram(scaledDesign, rows, columns);
  return { input, weightedRows: countWeightedRows(input), scaledDesign, scales, target, gram, moments };
}

/** target − X·b on the scaled columns, four columns to a pass. */
function computeRemainder(
  equations: NormalEquations,
  columns: readonly number[],
  solution: Float64Array,
): Float64Array {
  const { scaledDesign, target } = equations;
  const rows = target.length;
  const remainder = target.slice();
  let k = 0;
  for (; k + 4 <= columns.length; k += 4) {
    const a = columns[k]! * rows;
    const b = columns[k + 1]! * rows;
    const c = columns[k + 2]! * rows;
    const d = columns[k + 3]! * rows;
    const factorA = solution[k]!;
    const factorB = solution[k + 1]!;
    const factorC = solution[k + 2]!;
    const factorD = solution[k + 3]!;
    for (let i = 0; i < rows; i++) {
      remainder[i]! -=
        scaledDesign[a + i]! * factorA +
        scaledDesign[b + i]! * factorB +
        scaledDesign[c + i]! * factorC +
        scaledDesign[d + i]! * factorD;
    }
  }
  for (; k < columns.length; k++) {
    const a = columns[k]! * rows;
    const factor = solution[k]!;
    for (let i = 0; i < rows; i++) remainder[i]! -= scaledDesign[a + i]! * factor;
  }
  return remainder;
}

/** Leverages: squared lengths of the rows of X·U⁻¹, whose columns are orthonormal. */
function computeLeverages(equations: NormalEquations, columns: readonly number[], upper: Float64Array): Float64Array {
  const { scaledDesign, target } = equations;
  const rows = target.length;
  const size = columns.length;
  const inverse = invertUpper(upper, size);
  const leverages = new Float64Array(rows);
  const chunk = 512;
  const column = new Float64Array(chunk);
  for (let from = 0; from < rows; from += chunk) {
    const count = Math.min(chunk, rows - from);
    for (let c = 0; c < size; c++) {
      column.fill(0);
      let k = 0;
      for (; k + 4 <= c + 1; k += 4) {
        const a = columns[k]! * rows + from;
        const b = columns[k + 1]! * rows + from;
        const d = columns[k + 2]! * rows + from;
        const e = columns[k + 3]! * rows + from;
        const fa = inverse[k * size + c]!;
        const fb = inverse[(k + 1) * size + c]!;
        const fd = inverse[(k + 2) * size + c]!;
        const fe = inverse[(k + 3) * size + c]!;
        for (let i = 0; i < count; i++) {
          column[i]! +=
            scaledDesign[a + i]! * fa +
            scaledDesign[b + i]! * fb +
            scaledDesign[d + i]! * fd +
            scaledDesign[e + i]! * fe;
        }
      }
      for (; k <= c; k++) {
        const a = columns[k]! * rows + from;
        const factor = inverse[k * size + c]!;
        for (let i = 0; i < count; i++) column[i]! += scaledDesign[a + i]! * factor;
      }
      for (let i = 0; i < count; i++) leverages[from + i]! += column[i]! * column[i]!;
    }
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
  const { input, gram, moments, scales, scaledDesign, weightedRows } = equations;
  const { rows, columns: width, design, weights, response } = input;
  const penalties = specification.penalties ?? input.penalties;
  const columns = specification.columns ?? Array.from({ length: width }, (_, j) => j);
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
  const first = computeRemainder(equations, columns, solution);
  const gap = new Float64Array(size);
  for (let k = 0; k < size; k++) {
    const j = columns[k]!;
    let sum = 0;
    for (let i = 0, p = j * rows; i < rows; i++, p++) sum += scaledDesign[p]! * first[i]!;
    const scale = scales[j]!;
    gap[k] = sum - ((penalties?.[j] ?? 0) / (scale * scale)) * solution[k]!;
  }
  const change = solveCholesky(upper, size, gap);
  for (let k = 0; k < size; k++) solution[k]! += change[k]!;

  const remainder = computeRemainder(equations, columns, solution);
  const coefficients: (number | null)[] = Array.from({ length: width }, () => null);
  const factorR = new Float64Array(size * size);
  for (let k = 0; k < size; k++) {
    const scale = scales[columns[k]!]!;
    coefficients[columns[k]!] = solution[k]! / scale;
    for (let r = 0; r <= k; r++) factorR[r * size + k] = upper[r * size + k]! * scale;
  }
  const fitted = new Float64Array(rows);
  const residuals = new Float64Array(rows);
  let residualSumOfSquares = 0;
  for (let i = 0; i < rows; i++) {
    const root = weights ? Math.sqrt(weights[i]!) : 1;
    residualSumOfSquares += remainder[i]! * remainder[i]!;
    if (root > 0) {
      residuals[i] = remainder[i]! / root;
      fitted[i] = response[i]! - residuals[i]!;
    } else {
      let value = 0;
      for (const j of columns) value += design[i * width + j]! * coefficients[j]!;
      fitted[i] = value;
      residuals[i] = response[i]! - value;
    }
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

import { InvalidInputError, TooFewRowsError } from '../errors.ts';
import { invertUpper, solveUpperTransposed } from '../matrix/triangular.ts';
import { countWeightedRows } from './input-check.ts';
import type { LeastSquaresFit, LeastSquaresInput } from './types.ts';

/** What covariance functions need of a fit; the fast kernel's fits satisfy it too. */
export type CovarianceFit = Pick<
  LeastSquaresFit,
  'rank' | 'kept' | 'factorR' | 'residuals' | 'residualSumOfSquares'
> & {
  hatDiagonal: Float64Array | null;
  /** Parameters used up, where neither the rank nor the penalties tell: absorbed intercepts, coefficients partialled out. */
  parameters?: number;
};

/**
 * Degrees of freedom left: rows of positive weight − rank, or with penalties − the trace of the hat matrix (Hastie & Tibshirani 1990,
 * Generalized Additive Models, 3.5), or − the fit's own count of parameters. Throws TooFewRowsError if none are left.
 */
export function computeResidualDegrees(input: LeastSquaresInput, fit: CovarianceFit): number {
  const rows = countWeightedRows(input);
  let used = fit.parameters ?? fit.rank;
  if (fit.parameters === undefined && input.penalties?.some((penalty) => penalty > 0)) {
    used = readLeverages(fit).reduce((sum, leverage) => sum + leverage, 0);
  }
  if (rows - used <= 1e-9) throw new TooFewRowsError(rows, Math.ceil(used) + 1);
  return rows - used;
}

function readLeverages(fit: CovarianceFit): Float64Array {
  if (!fit.hatDiagonal) throw new InvalidInputError('this needs a fit with leverages');
  return fit.hatDiagonal;
}

/** Rows q = R⁻ᵀ·√w·x of the orthonormal factor, rows × rank, row-major. */
function computeOrthonormalRows(input: LeastSquaresInput, fit: CovarianceFit): Float64Array {
  const { design, rows, columns, weights } = input;
  const { rank, kept, factorR } = fit;
  const orthonormal = new Float64Array(rows * rank);
  const row = new Float64Array(rank);
  for (let i = 0; i < rows; i++) {
    const root = weights ? Math.sqrt(weights[i]!) : 1;
    for (let k = 0; k < rank; k++) row[k] = root * design[i * columns + kept[k]!]!;
    orthonormal.set(solveUpperTransposed(factorR, rank, row), i * rank);
  }
  return orthonormal;
}

/** Scores q·√w·e, rows × rank, row-major; their outer products, between R⁻¹ and R⁻ᵀ, make every sandwich. */
function computeScores(input: LeastSquaresInput, fit: CovarianceFit, divisors?: Float64Array): Float64Array {
  const scores = computeOrthonormalRows(input, fit);
  for (let i = 0; i < input.rows; i++) {
    const root = input.weights ? Math.sqrt(input.weights[i]!) : 1;
    const factor = (root * fit.residuals[i]!) / (divisors?.[i] ?? 1);
    for (let k = 0; k < fit.rank; k++) scores[i * fit.rank + k]! *= factor;
  }
  return scores;
}

/** Adds `factor` · (a·bᵀ + b·aᵀ) / 2 of two rows to a symmetric meat. */
function addOuterProduct(meat: Float64Array, rank: number, a: Float64Array, b: Float64Array, factor: number): void {
  for (let r = 0; r < rank; r++) {
    for (let c = 0; c < rank; c++) meat[r * rank + c]! += (factor * (a[r]! * b[c]! + b[r]! * a[c]!)) / 2;
  }
}

/** factor · R⁻¹·M·R⁻ᵀ, rank × rank, row-major. */
function wrapMeat(fit: CovarianceFit, meat: Float64Array, factor: number): Float64Array {
  const { rank, factorR } = fit;
  const inverse = invertUpper(factorR, rank);
  const half = new Float64Array(rank * rank);
  for (let r = 0; r < rank; r++) {
    for (let k = r; k < rank; k++) {
      const value = inverse[r * rank + k]!;
      for (let c = 0; c < rank; c++) half[r * rank + c]! += value * meat[k * rank + c]!;
    }
  }
  const covariance = new Float64Array(rank * rank);
  for (let r = 0; r < rank; r++) {
    for (let c = r; c < rank; c++) {
      let sum = 0;
      for (let k = c; k < rank; k++) sum += half[r * rank + k]! * inverse[c * rank + k]!;
      covariance[r * rank + c] = factor * sum;
      covariance[c * rank + r] = factor * sum;
    }
  }
  return covariance;
}

/**
 * σ²·(XᵀWX + Λ)⁻¹, rank × rank in the order of `kept`, row-major, as R⁻¹R⁻ᵀ; σ² = Σ w·e² / residual degrees. With penalties this is the
 * posterior covariance of the coefficients under the normal prior that the penalties stand for. Checked against R's vcov.
 */
export function computeClassicalCovariance(input: LeastSquaresInput, fit: CovarianceFit): Float64Array {
  const { rank } = fit;
  const identity = new Float64Array(rank * rank);
  for (let k = 0; k < rank; k++) identity[k * rank + k] = 1;
  return wrapMeat(fit, identity, fit.residualSumOfSquares / computeResidualDegrees(input, fit));
}

export type HeteroskedasticKind = 'HC0' | 'HC1' | 'HC2' | 'HC3';

/**
 * Heteroskedasticity-consistent covariance (White 1980; MacKinnon & White 1985): HC0 plain, HC1 · n / (n − k), HC2 with e² / (1 − h), HC3 with
 * e² / (1 − h)². rank × rank in the order of `kept`, row-major. Checked against R's sandwich::vcovHC.
 * Throws InvalidInputError for HC2 and HC3 when a row has leverage 1.
 */
export function computeHeteroskedasticCovariance(
  input: LeastSquaresInput,
  fit: CovarianceFit,
  kind: HeteroskedasticKind,
): Float64Array {
  const { rows } = input;
  let divisors: Float64Array | undefined;
  if (kind === 'HC2' || kind === 'HC3') {
    divisors = readLeverages(fit).map((leverage, i) => {
      const rest = 1 - leverage;
      if (rest < 1e-10) throw new InvalidInputError(`row ${i + 1} has leverage 1, so ${kind} is not defined`);
      return kind === 'HC2' ? Math.sqrt(rest) : rest;
    });
  }
  const scores = computeScores(input, fit, divisors);
  const meat = new Float64Array(fit.rank * fit.rank);
  for (let i = 0; i < rows; i++) {
    const row = scores.subarray(i * fit.rank, (i + 1) * fit.rank);
    addOuterProduct(meat, fit.rank, row, row, 1);
  }
  const weighted = countWeightedRows(input);
  return wrapMeat(fit, meat, kind === 'HC1' ? weighted / computeResidualDegrees(input, fit) : 1);
}

/** Sums of the scores by group, in the order the groups first appear. */
function sumScoresByGroup<Group>(
  scores: Float64Array,
  rank: number,
  groups: ArrayLike<Group>,
): Map<Group, Float64Array> {
  const sums = new Map<Group, Float64Array>();
  for (let i = 0; i < groups.length; i++) {
    let sum = sums.get(groups[i]!);
    if (!sum) sums.set(groups[i]!, (sum = new Float64Array(rank)));
    for (let k = 0; k < rank; k++) sum[k]! += scores[i * rank + k]!;
  }
  return sums;
}

/**
 * Covariance clustered by `clusters` (one label per row), with the factor G / (G − 1) · (n − 1) / (n − k) (Liang & Zeger 1986; Cameron & Miller
 * 2015). rank × rank in the order of `kept`, row-major. Checked against R's sandwich::vcovCL(type = "HC1").
 * Throws TooFewRowsError with fewer than two clusters.
 */
export function computeClusteredCovariance(
  input: LeastSquaresInput,
  fit: CovarianceFit,
  clusters: ArrayLike<number | string>,
): Float64Array {
  if (clusters.length !== input.rows) throw new InvalidInputError(`${clusters.length} clusters for ${input.rows} rows`);
  const sums = sumScoresByGroup(computeScores(input, fit), fit.rank, clusters);
  if (sums.size < 2) throw new TooFewRowsError(sums.size, 2, 'clusters');
  const meat = new Float64Array(fit.rank * fit.rank);
  for (const sum of sums.values()) addOuterProduct(meat, fit.rank, sum, sum, 1);
  const rows = countWeightedRows(input);
  return wrapMeat(fit, meat, (sums.size / (sums.size - 1)) * ((rows - 1) / computeResidualDegrees(input, fit)));
}

export interface NeweyWestOptions {
  /** Number of lags with weight; lag l has 1 − l / (lag + 1). */
  lag: number;
  /** Whether to multiply by n / (n − k). */
  isAdjusted?: boolean;
  /** Whole number of the period (week) of each row; the rows' order if missing. Scores of one period are summed, and a period nobody reported stays a gap. */
  periods?: ArrayLike<number>;
}

/**
 * Covariance under autocorrelation up to `lag` periods with Bartlett weights (Newey & West 1987), no prewhitening; over several series the scores
 * of a period are summed first (Driscoll & Kraay 1998). rank × rank in the order of `kept`, row-major.
 * Checked against R's sandwich::NeweyWest(prewhite = FALSE).
 */
export function computeNeweyWestCovariance(
  input: LeastSquaresInput,
  fit: CovarianceFit,
  options: NeweyWestOptions,
): Float64Array {
  const { lag, isAdjusted = false } = options;
  if (!Number.isInteger(lag) || lag < 0) throw new InvalidInputError('lag must be a whole number from 0 on');
  const periods = options.periods ?? Array.from({ length: input.rows }, (_, i) => i);
  if (periods.length !== input.rows) throw new InvalidInputError(`${periods.length} periods for ${input.rows} rows`);
  const sums = sumScoresByGroup(computeScores(input, fit), fit.rank, periods);
  const meat = new Float64Array(fit.rank * fit.rank);
  for (const [period, sum] of sums) {
    addOuterProduct(meat, fit.rank, sum, sum, 1);
    for (let l = 1; l <= lag; l++) {
      const earlier = sums.get(period - l);
      if (earlier) addOuterProduct(meat, fit.rank, sum, earlier, 2 * (1 - l / (lag + 1)));
    }
  }
  return wrapMeat(fit, meat, isAdjusted ? countWeightedRows(input) / computeResidualDegrees(input, fit) : 1);
}

/** Square roots of the diagonal, in the order of `kept`. */
export function computeStandardErrors(covariance: Float64Array, rank: number): Float64Array {
  return Float64Array.from({ length: rank }, (_, k) => Math.sqrt(Math.max(0, covariance[k * rank + k]!)));
}

import { Matrix, SingularValueDecomposition } from 'ml-matrix';
import { InvalidInputError } from '../errors.ts';
import { invertUpper } from '../matrix/triangular.ts';
import type { LeastSquaresFit, LeastSquaresInput } from '../regression/types.ts';

type Factorised = Pick<LeastSquaresFit, 'rank' | 'kept' | 'factorR'>;

/**
 * Variance inflation factors in the order of `kept`, null for a constant column: (Σw·(x − x̄)²) · diagonal of (XᵀWX)⁻¹ for a design that spans an
 * intercept; every other column counts. Source: Marquardt 1970. Checked against R's car::vif.
 * Throws InvalidInputError if the fit was penalised, whose factor isn't the design's.
 */
export function computeVarianceInflation(input: LeastSquaresInput, fit: Factorised): (number | null)[] {
  if (input.penalties?.some((penalty) => penalty > 0)) {
    throw new InvalidInputError('variance inflation is a property of the unpenalised design');
  }
  const { design, rows, columns, weights } = input;
  const inverse = invertUpper(fit.factorR, fit.rank);
  return fit.kept.map((column, k) => {
    let weightSum = 0;
    let sum = 0;
    for (let i = 0; i < rows; i++) {
      const weight = weights?.[i] ?? 1;
      weightSum += weight;
      sum += weight * design[i * columns + column]!;
    }
    const mean = sum / weightSum;
    let squares = 0;
    for (let i = 0; i < rows; i++) squares += (weights?.[i] ?? 1) * (design[i * columns + column]! - mean) ** 2;
    if (squares <= weightSum * (1e-12 * mean) ** 2) return null;
    let diagonal = 0;
    for (let c = k; c < fit.rank; c++) diagonal += inverse[k * fit.rank + c]! ** 2;
    return squares * diagonal;
  });
}

export interface ConditionAnalysis {
  /** Condition indices, ascending; the last one is the scaled condition number. */
  indices: number[];
  /** proportions[index][coefficient]: share of the coefficient's variance (order of `kept`) that goes with the index; each column sums to 1. */
  proportions: number[][];
}

function decomposeFactor(fit: Factorised, isScaled: boolean): { values: number[]; vectors: Matrix } {
  const { rank, factorR } = fit;
  const factor = new Matrix(rank, rank);
  for (let c = 0; c < rank; c++) {
    let length = 1;
    if (isScaled) {
      let squares = 0;
      for (let r = 0; r <= c; r++) squares += factorR[r * rank + c]! ** 2;
      length = Math.sqrt(squares);
    }
    for (let r = 0; r <= c; r++) factor.set(r, c, factorR[r * rank + c]! / length);
  }
  const decomposition = new SingularValueDecomposition(factor);
  return { values: decomposition.diagonal, vectors: decomposition.rightSingularVectors };
}

/**
 * Condition indices and variance-decomposition proportions of the columns scaled to unit length, intercept included, not centred (Belsley, Kuh &
 * Welsch 1980, Regression Diagnostics, 3.2). The singular values of R are those of X. An index from 30 on with two proportions above 0.5 means that
 * those effects can't be told apart.
 */
export function analyseCondition(fit: Factorised): ConditionAnalysis {
  const { values, vectors } = decomposeFactor(fit, true);
  const largest = Math.max(...values);
  const order = values.map((_, k) => k).sort((a, b) => values[b]! - values[a]!);
  const shares = order.map((k) => fit.kept.map((_, j) => (vectors.get(j, k) / values[k]!) ** 2));
  const totals = fit.kept.map((_, j) => shares.reduce((sum, row) => sum + row[j]!, 0));
  return {
    indices: order.map((k) => largest / values[k]!),
    proportions: shares.map((row) => row.map((share, j) => share / totals[j]!)),
  };
}

/** Ratio of the largest to the smallest singular value of the design as it is, unscaled. Checked against R's kappa(exact = TRUE). */
export function computeConditionNumber(fit: Factorised): number {
  const { values } = decomposeFactor(fit, false);
  return Math.max(...values) / Math.min(...values);
}

/** Columns (as in the design) whose effects can't be told apart: groups of two or more that share an index ≥ 30 with proportions > 0.5. */
export function findInseparableColumns(fit: Factorised): number[][] {
  const { indices, proportions } = analyseCondition(fit);
  const groups: number[][] = [];
  indices.forEach((index, k) => {
    if (index < 30) return;
    const group = fit.kept.filter((_, j) => proportions[k]![j]! > 0.5);
    if (group.length >= 2) groups.push(group);
  });
  return groups;
}

import { InvalidInputError, TooFewRowsError, UndefinedStatisticError } from '../errors.ts';
import type { LeastSquaresFit } from '../regression/types.ts';

/** 1 − leverage below this counts as leverage 1: the row decides its own fitted value. */
const smallestFreedom = 1e-10;

/**
 * Residuals of each row under the fit without it, e / (1 − h) (weights, penalties included), without refitting; null where the row has
 * leverage 1, so that the others can't foretell it.
 */
export function computeLeaveOneOutResiduals(residuals: Float64Array, hatDiagonal: Float64Array): (number | null)[] {
  if (residuals.length !== hatDiagonal.length) throw new InvalidInputError('as many leverages as residuals');
  return Array.from(residuals, (residual, i) => {
    const freedom = 1 - hatDiagonal[i]!;
    return freedom < smallestFreedom ? null : residual / freedom;
  });
}

/** PRESS (Allen 1974): sum of squared leave-one-out residuals. Throws UndefinedStatisticError if a row has leverage 1. */
export function computePress(residuals: Float64Array, hatDiagonal: Float64Array): number {
  return computeLeaveOneOutResiduals(residuals, hatDiagonal).reduce<number>((sum, residual, i) => {
    if (residual === null) throw new UndefinedStatisticError(`row ${i + 1} has leverage 1, so PRESS is not defined`);
    return sum + residual * residual;
  }, 0);
}

export interface RowInfluence {
  leverage: number;
  /** e / (s·√(1 − h)). */
  standardised: number;
  /** The same with s from the other rows (externally studentised). */
  studentised: number;
  /** Cook's (1977) distance. */
  cooksDistance: number;
  /** Belsley, Kuh & Welsch 1980. */
  dffits: number;
}

/**
 * Influence of each row on an unpenalised, unweighted fit; null where it has leverage 1. Checked against R's rstandard, rstudent, cooks.distance
 * and dffits. Throws TooFewRowsError unless two residual degrees of freedom are left, UndefinedStatisticError if all residuals are 0.
 */
export function computeInfluence(fit: LeastSquaresFit): (RowInfluence | null)[] {
  const degrees = fit.residuals.length - fit.rank;
  if (degrees < 2) throw new TooFewRowsError(fit.residuals.length, fit.rank + 2);
  const sigma = Math.sqrt(fit.residualSumOfSquares / degrees);
  if (sigma === 0) throw new UndefinedStatisticError('without residuals no row has influence');
  return Array.from(fit.residuals, (residual, i) => {
    const leverage = fit.hatDiagonal[i]!;
    const freedom = 1 - leverage;
    if (freedom < smallestFreedom) return null;
    const standardised = residual / (sigma * Math.sqrt(freedom));
    const square = standardised * standardised;
    const studentised = standardised * Math.sqrt((degrees - 1) / (degrees - square));
    return {
      leverage,
      standardised,
      studentised,
      cooksDistance: (square * leverage) / (freedom * fit.rank),
      dffits: studentised * Math.sqrt(leverage / freedom),
    };
  });
}

/**
 * Cook's (1977) distances w·e²·h / (p·s²·(1 − h)²) of a fit whose leverages and parameters are counted by the caller, such as one with weights,
 * absorbed intercepts or penalties; null where a row has leverage 1. Checked against R's cooks.distance.
 * Throws UndefinedStatisticError if sigma is 0.
 */
export function computeCooksDistances(
  fit: { residuals: Float64Array; weights?: Float64Array; leverages: Float64Array },
  parameters: number,
  sigma: number,
): (number | null)[] {
  const { residuals, weights, leverages } = fit;
  if (residuals.length !== leverages.length) throw new InvalidInputError('as many leverages as residuals');
  if (sigma === 0) throw new UndefinedStatisticError('without residuals no row has influence');
  return Array.from(residuals, (residual, i) => {
    const leverage = leverages[i]!;
    const freedom = 1 - leverage;
    if (freedom < smallestFreedom) return null;
    return ((weights?.[i] ?? 1) * residual ** 2 * leverage) / (parameters * (sigma * freedom) ** 2);
  });
}

import { computeStudentQuantile } from '../../../shared/statistics/distributions/student-t.ts';
import type { LinePanel } from '../features/line-panel.ts';
import type { RolledCandidate } from '../search/roll-candidate.ts';
import type { Finding, FittedCoefficient, LineFit } from '../types.ts';
import type { KeptFit } from './kept-fit.ts';
import type { LineModel } from './line-model.ts';
import type { CarryRule } from './recent-level.ts';

/** Fourth moment of a normal score over its squared variance. */
const NORMAL_KURTOSIS = 3;

/** What is kept and shown of a fit: the line's slopes with their errors clustered by week, and how well the rows are met. */
export function reportFit(
  panel: LinePanel,
  averaged: readonly RolledCandidate[],
  carry: CarryRule,
  kept: KeptFit,
  influences: readonly Float64Array[],
  scores: LineFit['scores'],
  findings: readonly Finding[],
): LineFit {
  const { specification, model } = averaged[0]!;
  const columns = model.columns;
  const coefficients = columns.map((column, k): FittedCoefficient => {
    const estimate = kept.coefficients[k]!;
    const squares = influences.map((influence) => influence[k]! ** 2);
    const standardError = Math.sqrt(squares.reduce((sum, square) => sum + square, 0));
    const reach = computeStudentQuantile(0.975, countIndependentWeeks(squares)) * standardError;
    return {
      name: column.name,
      group: column.group,
      estimate,
      standardError,
      low95: estimate - reach,
      high95: estimate + reach,
    };
  });
  const { squares, total, weightSum, logLikelihood } = describeRows(model, kept);
  const parameters = kept.leverages.reduce((sum, leverage) => sum + leverage, 0);
  return {
    specification: {
      name: averaged[0]!.name,
      ...specification,
      halfLifeWeeks: Number.isFinite(specification.halfLifeWeeks) ? specification.halfLifeWeeks : null,
      isPoisson: panel.hasZeros,
      averagedWith: averaged.slice(1).map((candidate) => candidate.name),
      carry,
    },
    coefficients,
    rows: kept.rows.length,
    rank: kept.rank,
    sigma: Math.sqrt(squares / weightSum / Math.max(1e-9, 1 - parameters / kept.rows.length)),
    rSquared: total > 0 ? 1 - squares / total : 0,
    aic: -2 * logLikelihood + 2 * (parameters + 1),
    factorR: leadingTriangle(kept, columns.length),
    scores,
    findings,
    seconds: 0,
  };
}

/**
 * Degrees of freedom of a variance that is a sum over weeks, (Σv)² ÷ Σv² (Satterthwaite 1946) with v the expected squares: the observed ones
 * have three times their squared expectation under a normal score. An effect that moved in few weeks rests on few.
 */
function countIndependentWeeks(squares: readonly number[]): number {
  const sum = squares.reduce((total, square) => total + square, 0);
  const fourth = squares.reduce((total, square) => total + square * square, 0);
  if (!(fourth > 0)) return Math.max(1, squares.length - 1);
  return Math.max(2, Math.min(squares.length - 1, (NORMAL_KURTOSIS * sum * sum) / fourth));
}

/** Row sums of the fit in ln units within series, and the Gaussian log-likelihood under the row weights. */
function describeRows(
  model: LineModel,
  kept: KeptFit,
): { squares: number; total: number; weightSum: number; logLikelihood: number } {
  const { rowWeights, target } = model.target;
  const { moments } = model.estimate;
  let squares = 0;
  let total = 0;
  let weightSum = 0;
  let logLikelihood = 0;
  kept.rows.forEach(({ series: s, week: t }, i) => {
    const w = rowWeights[s]![t]!;
    const residual = kept.residuals[i]!;
    squares += w * residual ** 2;
    total += w * (target[s]![t]! - moments[s]!.targetMean) ** 2;
    weightSum += w;
    logLikelihood -= 0.5 * (Math.log(2 * Math.PI) - Math.log(kept.weights[i]!) + kept.weights[i]! * residual ** 2);
  });
  return { squares, total, weightSum, logLikelihood };
}

/** Upper triangle of the leading block of R that belongs to the line's slopes, row by row. */
function leadingTriangle(kept: KeptFit, columns: number): number[] {
  const leading = kept.kept.filter((j) => kept.open[j]! < columns).length;
  const triangle: number[] = [];
  for (let i = 0; i < leading; i++) {
    for (let j = i; j < leading; j++) triangle.push(kept.factorR[i * kept.rank + j]!);
  }
  return triangle;
}

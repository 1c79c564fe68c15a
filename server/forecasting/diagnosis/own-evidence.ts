import { factorCholesky, solveCholesky } from '../../../shared/statistics/matrix/cholesky.ts';
import type { EffectMember, FittedRows } from './fitted-rows.ts';

/** How much of an effect the members (items or locations) say themselves, and how far their slopes lie apart. */
export interface EffectEvidence {
  /** Mean over the members of the weight of their own evidence, 0…1; the rest is borrowed from the line. */
  own: number;
  /** Members with a slope of their own. */
  withOwnSlope: number;
  members: number;
  lowest: { name: string; slope: number };
  highest: { name: string; slope: number };
}

/**
 * Per column of the design with a deviation, the weight of the member's own evidence given the line's slope: 1 − λ·((M + Λ)⁻¹) of the column's
 * diagonal, with M = XᵀWX of the member's rows and deviations. It is the factor τ² / (τ² + v) that draws a random slope with sampling variance v
 * towards the line's (Searle, Casella & McCulloch 1992). memberOf: index of the row's member; columnsOf: the deviations of each member.
 */
export function weighOwnEvidence(
  rows: Pick<FittedRows, 'design' | 'columns' | 'weights' | 'penalties'>,
  memberOf: Int32Array,
  columnsOf: readonly (readonly number[])[],
): Map<number, number> {
  const { design, columns, weights, penalties } = rows;
  const moments = columnsOf.map((own) => new Float64Array(own.length * own.length));
  memberOf.forEach((member, i) => {
    const own = columnsOf[member]!;
    const moment = moments[member]!;
    own.forEach((a, r) => {
      const value = weights[i]! * design[i * columns + a]!;
      if (value === 0) return;
      for (let c = r; c < own.length; c++) moment[r * own.length + c]! += value * design[i * columns + own[c]!]!;
    });
  });
  const weightOf = new Map<number, number>();
  columnsOf.forEach((own, member) => {
    const size = own.length;
    const moment = moments[member]!;
    own.forEach((column, r) => (moment[r * size + r]! += penalties[column]!));
    const upper = factorCholesky(moment, size, 1e-14);
    own.forEach((column, r) => {
      if (!upper) return;
      const unit = new Float64Array(size);
      unit[r] = 1;
      const weight = 1 - penalties[column]! * solveCholesky(upper, size, unit)[r]!;
      weightOf.set(column, Math.max(0, Math.min(1, weight)));
    });
  });
  return weightOf;
}

/** The evidence of one effect; null where there is one member only or none has a slope of its own. */
export function describeEvidence(
  members: readonly EffectMember[],
  weightOf: ReadonlyMap<number, number>,
): EffectEvidence | null {
  const fitted = members.filter(({ slope }) => !Number.isNaN(slope));
  const withOwnSlope = fitted.filter(({ column }) => column !== null).length;
  if (fitted.length < 2 || withOwnSlope === 0) return null;
  const own = fitted.reduce(
    (sum, { column }) => sum + (column === null ? 0 : (weightOf.get(column) ?? 0)) / fitted.length,
    0,
  );
  const bySlope = [...fitted].sort((a, b) => a.slope - b.slope);
  const lowest = bySlope[0]!;
  const highest = bySlope.at(-1);
  return {
    own,
    withOwnSlope,
    members: fitted.length,
    lowest: { name: lowest.name, slope: lowest.slope },
    highest: { name: highest.name, slope: highest.slope },
  };
}

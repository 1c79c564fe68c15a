import { SingularMatrixError } from '../../../shared/statistics/errors.ts';
import { factorHouseholder } from '../../../shared/statistics/matrix/householder-qr.ts';
import { solveUpper } from '../../../shared/statistics/matrix/triangular.ts';
import type { FittedRows } from './fitted-rows.ts';

/** The line's slopes alone, with everything else of the design partialled out. */
export interface LineSlopes {
  /** Indices of the effects with a slope of their own in the fit, in the order of the columns below. */
  effects: number[];
  /** rows × effects, row-major: the line's columns less what the (penalised) deviations explain of them. */
  design: Float64Array;
  /** effects × effects upper triangle F, row-major; FᵀF = (XᵀWX + Λ) of the line's slopes given the deviations. */
  factorR: Float64Array;
}

/**
 * Partials the deviations of items and locations out of the line's columns (Frisch–Waugh–Lovell, with penalties as the Schur complement),
 * so that covariances of hundreds of coefficients cost no more than those of the line's few. R's columns are put in the order deviations,
 * line and brought to a triangle again: the trailing block is the line's factor.
 * Throws SingularMatrixError if the line's slopes can't be told apart to working precision.
 */
export function partialOutDeviations(rows: FittedRows): LineSlopes {
  const { design, columns, kept, rank, factorR } = rows;
  const positionOf = new Map(kept.map((column, position) => [column, position]));
  const effects: number[] = [];
  const linePositions: number[] = [];
  rows.effects.forEach(({ column }, e) => {
    const position = column === null ? undefined : positionOf.get(column);
    if (position === undefined) return;
    effects.push(e);
    linePositions.push(position);
  });
  const isLine = new Set(linePositions);
  const rest = kept.map((_, position) => position).filter((position) => !isLine.has(position));
  const order = [...rest, ...linePositions];
  const permuted = new Float64Array(rank * rank);
  order.forEach((position, c) => {
    for (let r = 0; r <= position; r++) permuted[c * rank + r] = factorR[r * rank + position]!;
  });
  const { factorR: triangle, rank: found } = factorHouseholder(permuted, rank, rank);
  if (found < rank) throw new SingularMatrixError('the slopes of the line depend on one another');
  const width = effects.length;
  const before = rest.length;
  const factor = new Float64Array(width * width);
  const shares = new Float64Array(before * width);
  const leading = new Float64Array(before * before);
  for (let r = 0; r < before; r++) {
    for (let c = r; c < before; c++) leading[r * before + c] = triangle[r * rank + c]!;
  }
  for (let k = 0; k < width; k++) {
    for (let r = 0; r <= k; r++) factor[r * width + k] = triangle[(before + r) * rank + before + k]!;
    const share = solveUpper(
      leading,
      before,
      Array.from({ length: before }, (_, r) => triangle[r * rank + before + k]!),
    );
    for (let r = 0; r < before; r++) shares[r * width + k] = share[r]!;
  }
  const count = rows.residuals.length;
  const partial = new Float64Array(count * width);
  for (let i = 0; i < count; i++) {
    linePositions.forEach((position, k) => (partial[i * width + k] = design[i * columns + kept[position]!]!));
    for (let r = 0; r < before; r++) {
      const value = design[i * columns + kept[rest[r]!]!]!;
      if (value === 0) continue;
      for (let k = 0; k < width; k++) partial[i * width + k]! -= value * shares[r * width + k]!;
    }
  }
  return { effects, design: partial, factorR: factor };
}

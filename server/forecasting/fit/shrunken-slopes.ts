import type { LinePanel } from '../features/line-panel.ts';
import { factorCholesky, solveCholesky } from './cholesky.ts';
import type { SeriesMoments } from './series-moments.ts';
import type { SlopeLayout } from './slope-layout.ts';

/** Penalised least squares of a whole line with absorbed series intercepts. */
export interface SlopeSolution {
  /** One per coefficient of the layout. */
  coefficients: Float64Array;
  /** Lower Cholesky factor of ZᵀWZ + Λ, size × size. */
  factor: Float64Array;
}

/**
 * Solves (Σ precision·cross + Λ)·b = Σ precision·withTarget. precision: per series, 1/σ² of its noise; penalties: per coefficient.
 * Serves the search over specifications; the fit that is kept is estimated by the QR kernel (kept-fit.ts), and a property test
 * holds the two together.
 */
export function solveSlopes(
  panel: LinePanel,
  layout: SlopeLayout,
  moments: readonly SeriesMoments[],
  precision: Float64Array,
  penalties: Float64Array,
): SlopeSolution {
  const { size } = layout;
  const factor = new Float64Array(size * size);
  const coefficients = new Float64Array(size);
  addMoments(panel, layout, moments, precision, factor, coefficients);
  for (let p = 0; p < size; p++) factor[p * size + p]! += penalties[p]!;
  factorCholesky(factor, size);
  solveCholesky(factor, size, coefficients);
  return { coefficients, factor };
}

function addMoments(
  panel: LinePanel,
  layout: SlopeLayout,
  moments: readonly SeriesMoments[],
  precision: Float64Array,
  matrix: Float64Array,
  rightSide: Float64Array,
): void {
  const { size } = layout;
  const count = layout.columns.length;
  const positions = new Int32Array(3 * count);
  panel.series.forEach((series, s) => {
    const { cross, withTarget, rows } = moments[s]!;
    if (rows < 2) return;
    const scale = precision[s]!;
    for (let k = 0; k < count; k++) {
      positions[3 * k] = k;
      positions[3 * k + 1] = layout.itemAt[series.item * count + k]!;
      positions[3 * k + 2] = layout.locationAt[series.location * count + k]!;
    }
    for (let k = 0; k < count; k++) {
      for (let a = 0; a < 3; a++) {
        const row = positions[3 * k + a]!;
        if (row < 0) continue;
        rightSide[row]! += scale * withTarget[k]!;
        for (let l = 0; l < count; l++) {
          const value = scale * (l <= k ? cross[k * count + l]! : cross[l * count + k]!);
          if (value === 0) continue;
          for (let b = 0; b < 3; b++) {
            const column = positions[3 * l + b]!;
            if (column >= 0 && column <= row) matrix[row * size + column]! += value;
          }
        }
      }
    }
  });
}

/** Slopes of each series: the line's plus its item's and its location's deviation. Series × columns. */
export function slopesBySeries(panel: LinePanel, layout: SlopeLayout, coefficients: Float64Array): Float64Array[] {
  const count = layout.columns.length;
  return panel.series.map((series) =>
    Float64Array.from({ length: count }, (_, k) => {
      const item = layout.itemAt[series.item * count + k]!;
      const location = layout.locationAt[series.location * count + k]!;
      return coefficients[k]! + (item >= 0 ? coefficients[item]! : 0) + (location >= 0 ? coefficients[location]! : 0);
    }),
  );
}

/** Σw·e² of one series under given slopes, from its moments alone. */
export function seriesResidualSquares(moments: SeriesMoments, slopes: Float64Array): number {
  const count = slopes.length;
  let sum = moments.targetSquares;
  for (let k = 0; k < count; k++) {
    let inner = 0;
    const row = k * count;
    for (let l = 0; l < k; l++) inner += 2 * moments.cross[row + l]! * slopes[l]!;
    inner += moments.cross[row + k]! * slopes[k]!;
    sum += slopes[k]! * (inner - 2 * moments.withTarget[k]!);
  }
  return Math.max(0, sum);
}

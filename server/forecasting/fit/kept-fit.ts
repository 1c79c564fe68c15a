import { fitLeastSquares } from '../../../shared/statistics/regression/least-squares.ts';
import type { LeastSquaresFit } from '../../../shared/statistics/regression/types.ts';
import type { LinePanel } from '../features/line-panel.ts';
import { finishSlopes, type FitTarget, type LineEstimate } from './line-estimate.ts';

const CLOSED = 1e9;

/** One used row of the panel in the order of the design. */
export interface KeptRow {
  series: number;
  week: number;
}

/** The fit that is kept and shown: the estimate's design solved by Householder QR, with leverages. */
export interface KeptFit {
  rows: KeptRow[];
  /** Indices into the layout's coefficients that took part (a closed deviation doesn't). */
  open: number[];
  /** All coefficients of the layout. */
  coefficients: Float64Array;
  slopes: Float64Array[];
  levels: Float64Array;
  rank: number;
  /** rank × rank, row-major, of the weighted and penalised design. */
  factorR: Float64Array;
  kept: readonly number[];
  /** Per row, ln units. */
  residuals: Float64Array;
  leaveOneOut: Float64Array;
  leverages: Float64Array;
  /** Weight per row: noise precision × row weight. */
  weights: Float64Array;
  /** rows × open, row-major, centred within the series. */
  design: Float64Array;
}

/**
 * Solves an estimate's rows by the QR kernel. Series intercepts are absorbed by weighted centring, so a row's leverage is
 * w/Σw(series) plus that of the centred design (Frisch–Waugh–Lovell).
 */
export function keepFit(panel: LinePanel, estimate: LineEstimate, fitTarget: FitTarget, lastWeek: number): KeptFit {
  const { layout, moments, penalties, noise } = estimate;
  const count = layout.columns.length;
  const open: number[] = [];
  const openAt = new Int32Array(layout.size).fill(-1);
  for (let p = 0; p < layout.size; p++) {
    if (penalties[p]! >= CLOSED) continue;
    openAt[p] = open.length;
    open.push(p);
  }
  const rows: KeptRow[] = [];
  panel.series.forEach((series, s) => {
    if (moments[s]!.rows < 2) return;
    for (let t = 0; t <= lastWeek; t++)
      if (series.isUsed[t] && fitTarget.rowWeights[s]![t]! > 0) rows.push({ series: s, week: t });
  });
  const width = open.length;
  const design = new Float64Array(rows.length * width);
  const response = new Float64Array(rows.length);
  const weights = new Float64Array(rows.length);
  rows.forEach(({ series: s, week: t }, i) => {
    const { item, location } = panel.series[s]!;
    const own = moments[s]!;
    response[i] = fitTarget.target[s]![t]! - own.targetMean;
    weights[i] = noise.precision[s]! * fitTarget.rowWeights[s]![t]!;
    for (let k = 0; k < count; k++) {
      const value = layout.columns[k]!.values[s]![t]! - own.columnMeans[k]!;
      for (const p of [k, layout.itemAt[item * count + k]!, layout.locationAt[location * count + k]!]) {
        if (p >= 0 && openAt[p]! >= 0) design[i * width + openAt[p]!] = value;
      }
    }
  });
  const fit =
    width > 0
      ? fitLeastSquares({
          design,
          rows: rows.length,
          columns: width,
          response,
          weights,
          penalties: Float64Array.from(open, (p) => penalties[p]!),
        })
      : interceptsOnly(response);
  const coefficients = new Float64Array(layout.size);
  fit.coefficients.forEach((value, j) => (coefficients[open[j]!] = value ?? 0));
  const { slopes, levels } = finishSlopes(panel, layout, moments, coefficients);
  const leverages = new Float64Array(rows.length);
  const leaveOneOut = new Float64Array(rows.length);
  rows.forEach(({ series: s, week: t }, i) => {
    leverages[i] = Math.min(1, fitTarget.rowWeights[s]![t]! / moments[s]!.weight + fit.hatDiagonal[i]!);
    leaveOneOut[i] = fit.residuals[i]! / Math.max(0.05, 1 - leverages[i]);
  });
  return {
    rows,
    open,
    coefficients,
    slopes,
    levels,
    rank: fit.rank,
    factorR: fit.factorR,
    kept: fit.kept,
    residuals: fit.residuals,
    leaveOneOut,
    leverages,
    weights,
    design,
  };
}

/** A line in which nothing ever moved: the absorbed intercepts are the whole fit. */
function interceptsOnly(response: Float64Array): LeastSquaresFit {
  return {
    coefficients: [],
    rank: 0,
    kept: [],
    dropped: [],
    factorR: new Float64Array(0),
    fitted: new Float64Array(response.length),
    residuals: response,
    hatDiagonal: new Float64Array(response.length),
    residualSumOfSquares: response.reduce((sum, value) => sum + value * value, 0),
  };
}

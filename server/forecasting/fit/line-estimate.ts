import type { Column } from '../features/column.ts';
import type { LinePanel } from '../features/line-panel.ts';
import { computeDesignEffect } from './design-effect.ts';
import { computeSeriesMoments, type SeriesMoments } from './series-moments.ts';
import { seriesResidualSquares, slopesBySeries, solveSlopes, type SlopeSolution } from './shrunken-slopes.ts';
import { layOutSlopes, type SlopeLayout } from './slope-layout.ts';
import {
  improveVarianceComponents,
  penaltiesOf,
  startVarianceComponents,
  type VarianceComponents,
} from './variance-components.ts';

const VARIANCE_ROUNDS = 6;
const SIGN_ROUNDS = 4;
/** Rows that the line's noise variance counts for beside a series' own. */
const PRIOR_ROWS = 8;
/** A deviation under this penalty is 0 to any digit that matters. */
const CLOSED = 1e12;

/** What a fit needs besides columns: ln units (or a working response) and weights, per series and week. */
export interface FitTarget {
  target: readonly Float64Array[];
  rowWeights: readonly Float64Array[];
}

/** Noise and shrinkage, estimated once on all of the training weeks and then held for fits on shorter stretches. */
export interface LineNoise {
  /** Per series, 1/σ². */
  precision: Float64Array;
  components: VarianceComponents;
}

export interface LineEstimate {
  layout: SlopeLayout;
  moments: readonly SeriesMoments[];
  noise: LineNoise;
  penalties: Float64Array;
  solution: SlopeSolution;
  /** Series × columns. */
  slopes: Float64Array[];
  /** Intercept per series; NaN where the series has no used week. */
  levels: Float64Array;
  /** Slopes that theory forbids and that were replaced: item null = the line's own, set to 0. */
  wrongSigns: { column: string; item: string | null; location: string | null }[];
}

/** Estimates a line on its used weeks up to `lastWeek`; noise and shrinkage are estimated unless given. */
export function estimateLine(
  panel: LinePanel,
  columns: readonly Column[],
  { target, rowWeights }: FitTarget,
  lastWeek: number,
  spread: number,
  given?: LineNoise,
): LineEstimate {
  const layout = layOutSlopes(panel, columns, lastWeek);
  const moments = computeSeriesMoments(panel, columns, target, rowWeights, lastWeek);
  const noise = given ?? estimateNoise(panel, layout, moments, target, lastWeek);
  const penalties = penaltiesOf(layout, noise.components, spread);
  return holdSigns(panel, layout, moments, noise, penalties);
}

function estimateNoise(
  panel: LinePanel,
  layout: SlopeLayout,
  moments: readonly SeriesMoments[],
  target: readonly Float64Array[],
  lastWeek: number,
): LineNoise {
  let components = startVarianceComponents(layout);
  let precision: Float64Array = new Float64Array(panel.series.length).fill(pooledPrecision(moments));
  for (let round = 0; round < VARIANCE_ROUNDS; round++) {
    const solution = solveSlopes(panel, layout, moments, precision, penaltiesOf(layout, components));
    const slopes = slopesBySeries(panel, layout, solution.coefficients);
    precision = estimatePrecision(moments, slopes, layout.size);
    if (round === 1) {
      const residuals = standardisedResiduals(panel, layout.columns, moments, target, slopes, precision, lastWeek);
      const itemCount = panel.items.length;
      const locationCount = panel.locations.length;
      components = {
        ...components,
        itemDesignEffect: computeDesignEffect(panel, residuals, itemCount, (s) => panel.series[s]!.item),
        locationDesignEffect: computeDesignEffect(panel, residuals, locationCount, (s) => panel.series[s]!.location),
        lineDesignEffect: computeDesignEffect(panel, residuals, 1, () => 0),
      };
    }
    components = improveVarianceComponents(layout, solution, components);
  }
  return { precision, components };
}

function pooledPrecision(moments: readonly SeriesMoments[]): number {
  let squares = 0;
  let weight = 0;
  for (const one of moments) {
    squares += one.targetSquares;
    weight += one.weight;
  }
  return squares > 0 ? (2 * weight) / squares : 1;
}

/** 1/σ² per series, its variance drawn towards the line's by the weight of a few rows. */
function estimatePrecision(
  moments: readonly SeriesMoments[],
  slopes: readonly Float64Array[],
  size: number,
): Float64Array {
  const squares = moments.map((one, s) => seriesResidualSquares(one, slopes[s]!));
  let totalSquares = 0;
  let totalWeight = 0;
  let rows = 0;
  moments.forEach((one, s) => {
    totalSquares += squares[s]!;
    totalWeight += one.weight;
    rows += one.rows;
  });
  const used = Math.min(0.5, (moments.length + 0.5 * size) / Math.max(1, rows));
  const pooled = Math.max(totalSquares / Math.max(totalWeight, 1e-9) / (1 - used), 1e-6);
  return Float64Array.from(moments, (one, s) => {
    const meanWeight = one.rows > 0 ? one.weight / one.rows : 1;
    const variance = (squares[s]! / meanWeight / (1 - used) + PRIOR_ROWS * pooled) / (one.rows + PRIOR_ROWS);
    return 1 / Math.max(variance, 0.05 * pooled);
  });
}

function standardisedResiduals(
  panel: LinePanel,
  columns: readonly Column[],
  moments: readonly SeriesMoments[],
  target: readonly Float64Array[],
  slopes: readonly Float64Array[],
  precision: Float64Array,
  lastWeek: number,
): Float64Array[] {
  return panel.series.map((series, s) => {
    const residuals = new Float64Array(panel.pastWeeks).fill(Number.NaN);
    const level = levelOf(moments[s]!, slopes[s]!);
    const scale = Math.sqrt(precision[s]!);
    for (let t = 0; t <= lastWeek; t++) {
      if (!series.isUsed[t]) continue;
      residuals[t] = scale * (target[s]![t]! - level - linearPart(columns, slopes[s]!, s, t));
    }
    return residuals;
  });
}

/** Refits with a wrong-signed deviation closed (the line's slope serves), or with the line's own slope at 0, until signs hold. */
function holdSigns(
  panel: LinePanel,
  layout: SlopeLayout,
  moments: readonly SeriesMoments[],
  noise: LineNoise,
  penalties: Float64Array,
): LineEstimate {
  const { columns } = layout;
  const count = columns.length;
  const wrongSigns: LineEstimate['wrongSigns'] = [];
  let solution = solveSlopes(panel, layout, moments, noise.precision, penalties);
  for (let round = 0; round < SIGN_ROUNDS; round++) {
    let isChanged = false;
    const close = (p: number): void => {
      penalties[p] = CLOSED;
      isChanged = true;
    };
    columns.forEach((column, k) => {
      if (column.sign === 0) return;
      const line = solution.coefficients[k]! * column.sign;
      if (line < 0 && penalties[k]! < CLOSED) {
        wrongSigns.push({ column: column.name, item: null, location: null });
        close(k);
      }
      const isClosed = penalties[k]! >= CLOSED;
      for (const [at, names, level] of [
        [layout.itemAt, panel.items, 'item'],
        [layout.locationAt, panel.locations, 'location'],
      ] as const) {
        names.forEach((name, g) => {
          const p = at[g * count + k]!;
          if (p < 0 || penalties[p]! >= CLOSED) return;
          if (isClosed || line + solution.coefficients[p]! * column.sign < 0) {
            if (!isClosed) {
              wrongSigns.push({
                column: column.name,
                item: level === 'item' ? name : null,
                location: level === 'location' ? name : null,
              });
            }
            close(p);
          }
        });
      }
    });
    if (!isChanged) break;
    solution = solveSlopes(panel, layout, moments, noise.precision, penalties);
  }
  const { slopes, levels } = finishSlopes(panel, layout, moments, solution.coefficients);
  return { layout, moments, noise, penalties, solution, slopes, levels, wrongSigns };
}

/** Slopes per series with signs held, and the intercepts that go with them. */
export function finishSlopes(
  panel: LinePanel,
  layout: SlopeLayout,
  moments: readonly SeriesMoments[],
  coefficients: Float64Array,
): { slopes: Float64Array[]; levels: Float64Array } {
  const slopes = slopesBySeries(panel, layout, coefficients);
  for (const own of slopes) {
    layout.columns.forEach((column, k) => {
      if (column.sign !== 0 && own[k]! * column.sign < 0) {
        own[k] = coefficients[k]! * column.sign > 0 ? coefficients[k]! : 0;
      }
    });
  }
  const levels = Float64Array.from(moments, (one, s) => levelOf(one, slopes[s]!));
  return { slopes, levels };
}

function levelOf(moments: SeriesMoments, slopes: Float64Array): number {
  if (moments.rows === 0) return Number.NaN;
  let level = moments.targetMean;
  for (let k = 0; k < slopes.length; k++) level -= slopes[k]! * moments.columnMeans[k]!;
  return level;
}

/** x'b of series s in week t, without its intercept. */
export function linearPart(columns: readonly Column[], slopes: Float64Array, s: number, t: number): number {
  let sum = 0;
  for (let k = 0; k < slopes.length; k++) sum += slopes[k]! * columns[k]!.values[s]![t]!;
  return sum;
}

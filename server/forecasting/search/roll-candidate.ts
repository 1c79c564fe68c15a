import type { LinePanel } from '../features/line-panel.ts';
import { linearPart, type LineEstimate } from '../fit/line-estimate.ts';
import { buildColumnSet, fitLineModel, type ColumnSet, type LineModel } from '../fit/line-model.ts';
import { computeRecentLevels, type CarryRule } from '../fit/recent-level.ts';
import type { HolidayWeek } from '../types.ts';
import type { RollingFrame } from './rolling-frame.ts';
import { crpsOfSample, summariseShape, type CandidateScore } from './score.ts';
import { nameSpecification, type Specification } from './specification.ts';

/** A specification fitted on all training weeks and on the weeks up to each rolling origin. */
export interface RolledCandidate {
  specification: Specification;
  name: string;
  columnSet: ColumnSet;
  model: LineModel;
  /** ln forecast per cell of the frame, without a recent level. */
  linear: Float64Array;
  /** Per origin, per series: in-sample residuals by week, NaN where unused. */
  residuals: Float64Array[][];
}

/** Fits on own columns by what they depend on, so that candidates that differ elsewhere share them. */
export type OwnFits = Map<string, LineEstimate>;

export function rollCandidate(
  panel: LinePanel,
  holidays: readonly HolidayWeek[],
  frame: RollingFrame,
  specification: Specification,
  ownFits: OwnFits,
): RolledCandidate {
  const columnSet = buildColumnSet(panel, holidays, specification);
  const { splitPrice, advertisedPrice, halfLifeWeeks, spread } = specification;
  const fitAt = (lastWeek: number, start?: LineModel): LineModel => {
    const key = JSON.stringify([splitPrice, advertisedPrice, String(halfLifeWeeks), spread, lastWeek]);
    const fitted = fitLineModel(panel, columnSet, specification, lastWeek, start, ownFits.get(key));
    if (fitted.ownEstimate) ownFits.set(key, fitted.ownEstimate);
    return fitted;
  };
  const model = fitAt(panel.pastWeeks - 1);
  const linear = new Float64Array(frame.units.length);
  const residuals: Float64Array[][] = [];
  frame.origins.forEach((origin, o) => {
    const rolled = fitAt(origin, model);
    for (let i = 0; i < linear.length; i++) {
      if (frame.originOf[i] !== o) continue;
      const s = frame.seriesOf[i]!;
      const t = frame.weekOf[i]!;
      linear[i] =
        rolled.estimate.levels[s]! +
        linearPart(rolled.columns, rolled.estimate.slopes[s]!, s, t) +
        panel.series[s]!.offset[t]!;
    }
    residuals.push(residualsOf(panel, rolled, origin));
  });
  return { specification, name: nameSpecification(specification), columnSet, model, linear, residuals };
}

/** Residuals by series and week up to `lastWeek`, those of outliers drawn in to the bound; under Poisson ln of the bounded ratio units ÷ mean. */
export function residualsOf(panel: LinePanel, model: LineModel, lastWeek: number): Float64Array[] {
  return panel.series.map((series, s) => {
    const residuals = new Float64Array(panel.pastWeeks).fill(Number.NaN);
    const level = model.estimate.levels[s]!;
    const slopes = model.estimate.slopes[s]!;
    for (let t = 0; t <= lastWeek; t++) {
      if (!series.isUsed[t] || (series.units[t] === 0 && !panel.hasZeros)) continue;
      const linear = level + linearPart(model.columns, slopes, s, t) + series.offset[t]!;
      residuals[t] = panel.hasZeros
        ? Math.log(Math.max(series.units[t]! / Math.exp(linear), 0.05))
        : series.trust[t]! * (Math.log(series.units[t]!) - linear);
    }
    return residuals;
  });
}

/** ln forecasts per cell with the recent level of each origin's residuals carried forward by the rule. */
export function carryForward(
  panel: LinePanel,
  frame: RollingFrame,
  linear: Float64Array,
  residuals: readonly (readonly Float64Array[])[],
  rule: CarryRule,
): Float64Array {
  const levels = frame.origins.map((origin, o) => computeRecentLevels(panel, residuals[o]!, origin, rule));
  return linear.map((value, i) => {
    const o = frame.originOf[i]!;
    const s = frame.seriesOf[i]!;
    const t = frame.weekOf[i]!;
    const level = panel.series[s]!.isPromoted[t] ? levels[o]!.promoted[s]! : levels[o]!.other[s]!;
    return value + level * rule.decayPerWeek ** (t - frame.origins[o]! - 1);
  });
}

/**
 * CRPS and WAPE of ln forecasts over the frame, in units. The predictive distribution is the forecast times exp(series' noise × the
 * line's shape of standardised residuals), the shape kept apart for promoted and other weeks.
 */
export function scoreForecasts(
  panel: LinePanel,
  frame: RollingFrame,
  linear: Float64Array,
  precision: Float64Array,
  residuals: readonly Float64Array[],
): CandidateScore {
  const standardised: [number[], number[]] = [[], []];
  panel.series.forEach((series, s) => {
    const scale = Math.sqrt(precision[s]!);
    for (let t = 0; t < panel.pastWeeks; t++) {
      const residual = residuals[s]![t]!;
      if (!Number.isNaN(residual)) standardised[series.isPromoted[t] as 0 | 1].push(residual * scale);
    }
  });
  const shapes = [summariseShape(standardised[0]), summariseShape(standardised[1])];
  const byOrigin = new Float64Array(frame.origins.length);
  let error = 0;
  let units = 0;
  const sample = new Float64Array(shapes[0]!.length);
  for (let i = 0; i < linear.length; i++) {
    const s = frame.seriesOf[i]!;
    const shape = shapes[panel.series[s]!.isPromoted[frame.weekOf[i]!]!]!;
    const noise = 1 / Math.sqrt(precision[s]!);
    for (let q = 0; q < sample.length; q++) sample[q] = Math.exp(linear[i]! + noise * shape[q]!);
    const actual = frame.units[i]!;
    byOrigin[frame.originOf[i]!]! += crpsOfSample(sample, actual);
    error += Math.abs(Math.exp(linear[i]!) - actual);
    units += actual;
  }
  const total = byOrigin.reduce((sum, value) => sum + value, 0);
  return { crps: total / Math.max(1, linear.length), wape: units > 0 ? error / units : 0, byOrigin };
}

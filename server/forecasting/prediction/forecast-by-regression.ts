import { diagnoseLine } from '../diagnosis/diagnose-line.ts';
import type { LinePanel } from '../features/line-panel.ts';
import { markUnseen } from '../features/unseen-marks.ts';
import { reportFit } from '../fit/fit-report.ts';
import { keepFit } from '../fit/kept-fit.ts';
import { buildColumnSet, fitLineModel, type LineModel } from '../fit/line-model.ts';
import { weighOutliers } from '../fit/outlier-weights.ts';
import { computeRecentLevels, type CarryRule } from '../fit/recent-level.ts';
import { computeWeekInfluences } from '../ranges/coefficient-draws.ts';
import {
  quantilesOfDeviations,
  scaleByConformal,
  type DeviationQuantiles,
  type StandardisedError,
} from '../ranges/conformal.ts';
import { estimateNoiseScales, type NoiseScales } from '../ranges/noise-scale.ts';
import type { UnitPaths } from '../ranges/path-quantiles.ts';
import { coefficientVariance, simulatePaths } from '../ranges/simulate-paths.ts';
import {
  averageLinear,
  averageResiduals,
  chooseSpecification,
  startingCarry,
  type ChosenSpecification,
} from '../search/choose-specification.ts';
import { carryForward, rollCandidate, type OwnFits } from '../search/roll-candidate.ts';
import { buildRollingFrame, type RollingFrame } from '../search/rolling-frame.ts';
import type { Specification } from '../search/specification.ts';
import type { Finding, LineFit, LineInput, SeriesMethod } from '../types.ts';
import { buildEnsemble, leaveOneOutResiduals, predictByEnsemble } from './ensemble.ts';
import { tellAgainstBase } from './predicted-parts.ts';
import { computeSmearing, type RolledCell } from './smearing.ts';

const TIMES_LARGEST_SEEN = 3;
/** Outliers whose rows keep no more than this weight are named to people. */
const NAMED_BELOW = 0.5;

/** What a caller may fix instead of having it chosen out of sample. */
export interface SearchChoice {
  /** Specifications to average; the first is the kept fit. */
  specifications?: readonly [Specification, ...Specification[]];
  carry?: CarryRule;
  /** Whether the kept fit is diagnosed, which forecasts alone don't need. */
  isDiagnosed?: boolean;
}

/** Forecast of one series before its ranges: means, base and parts, per week of the horizon. */
export interface SeriesCentre {
  method: SeriesMethod;
  mean: Float64Array;
  /** exp of the parts' sum; null where the parts make the mean and the median comes from the paths. */
  median: Float64Array | null;
  base: Float64Array;
  marks: string[][];
  parts: Record<string, Float64Array>;
}

/** Fits the line, chooses its specification, and fills centres and paths of the series that bring rows to the fit. */
export function forecastByRegression(
  unweighted: LinePanel,
  input: LineInput,
  choice: SearchChoice,
  centres: SeriesCentre[],
  paths: UnitPaths,
  findings: Finding[],
): LineFit {
  const panel = trustOrdinaryWeeks(unweighted, input, findings);
  const lastWeek = panel.pastWeeks - 1;
  const frame = buildRollingFrame(panel);
  const chosen = choose(panel, input, frame, choice);
  const { averaged, carry } = chosen;
  const winner = averaged[0]!;
  const kept = keepFit(panel, winner.model.estimate, winner.model.target, lastWeek);
  const members = buildEnsemble(panel, input.holidays, chosen, kept);
  const residuals = leaveOneOutResiduals(panel, averaged, kept);
  const levels = computeRecentLevels(panel, residuals, lastWeek, carry);
  const rolled = rollCells(panel, frame, chosen);
  const smearing = panel.hasZeros ? { promoted: 1, other: 1 } : computeSmearing(panel, residuals, rolled);
  const unseen = markUnseen(panel);
  const linear = panel.series.map((series, s): Float64Array | undefined => {
    if (series.usedWeeks === 0) return undefined;
    const plan = predictByEnsemble(panel, members, s, 'planned', (h) => {
      const isPromoted = series.isPromoted[panel.pastWeeks + h];
      return (isPromoted ? levels.promoted[s]! : levels.other[s]!) * carry.decayPerWeek ** h;
    });
    const base = predictByEnsemble(panel, members, s, 'unpromoted', (h) => levels.other[s]! * carry.decayPerWeek ** h);
    const mean = plan.linear.map(
      (value, h) => Math.exp(value) * (series.isPromoted[panel.pastWeeks + h] ? smearing.promoted : smearing.other),
    );
    centres[s] = {
      method: panel.hasZeros ? 'poisson' : 'regression',
      mean,
      median: panel.hasZeros ? null : plan.linear.map(Math.exp),
      base: base.linear.map((value) => Math.exp(value) * smearing.other),
      marks: markCells(unseen[s]!, mean, series.largestUnits),
      parts: tellAgainstBase(plan, base),
    };
    return plan.linear;
  });
  const influences = computeWeekInfluences(winner.model.estimate, kept);
  const scales = estimateNoiseScales(panel, residuals);
  const standardised = standardise(panel, residuals, scales);
  const quantiles = quantilesByKind(panel, standardised);
  const errors = collectErrors(panel, frame, rolled, winner.model, scales, influences);
  simulatePaths(
    panel,
    {
      model: winner.model,
      columns: members[0]!.planned,
      linear,
      standardised,
      scales,
      influences,
      scaling: scaleByConformal(errors, quantiles),
      quantiles,
      seed: input.seed,
    },
    paths,
  );
  findings.push(...winner.columnSet.findings);
  for (const { column, item, location } of winner.model.estimate.wrongSigns) {
    findings.push({
      kind: item === null && location === null ? 'wrong-sign-line' : 'wrong-sign-own',
      ...(item === null ? {} : { item }),
      ...(location === null ? {} : { location }),
      values: { column },
    });
  }
  if (errors.length === 0) findings.push({ kind: 'ranges-not-scaled' });
  const scores = chosen.ranked.map(({ candidate, score }) => ({
    specification: candidate.name,
    crps: score.crps,
    wape: score.wape,
  }));
  const fit = reportFit(panel, averaged, carry, kept, influences, scores, findings);
  return choice.isDiagnosed ? { ...fit, diagnosis: diagnoseLine(panel, winner.model, kept) } : fit;
}

function choose(panel: LinePanel, input: LineInput, frame: RollingFrame, choice: SearchChoice): ChosenSpecification {
  const fixed = choice.specifications ?? (frame.origins.length === 0 ? [thinSpecification] : undefined);
  if (!fixed) {
    const chosen = chooseSpecification(panel, input.holidays, frame);
    return { ...chosen, carry: choice.carry ?? chosen.carry };
  }
  const ownFits: OwnFits = new Map();
  const averaged = fixed.map((one) => rollCandidate(panel, input.holidays, frame, one, ownFits));
  return { averaged, ranked: [], carry: choice.carry ?? startingCarry };
}

/** For lines too young to compare candidates: price and promotion only. */
const thinSpecification: Specification = {
  splitPrice: false,
  advertisedPrice: false,
  neighbourPrice: false,
  neighbourPromotion: false,
  attraction: false,
  around: false,
  freshCut: false,
  fourierPairs: 0,
  holidays: false,
  trend: false,
  halfLifeWeeks: Infinity,
  spread: 0.5,
};

/** Weighs rows by Huber's function on the residuals of a plain fit and names those that lost most of their weight. */
function trustOrdinaryWeeks(panel: LinePanel, input: LineInput, findings: Finding[]): LinePanel {
  if (panel.hasZeros) return panel;
  const specification = { ...thinSpecification, advertisedPrice: true };
  const columnSet = buildColumnSet(panel, input.holidays, specification);
  const weights = weighOutliers(panel, fitLineModel(panel, columnSet, specification, panel.pastWeeks - 1));
  const series = panel.series.map((one, s) => {
    const { item, location } = one.input;
    weights[s]!.forEach((weight, t) => {
      if (weight > NAMED_BELOW) return;
      const values = { week: panel.weeks[t]!, units: one.units[t]! };
      findings.push({ kind: 'outlier-week-weighed-less', item, location, values });
    });
    return { ...one, trust: weights[s]! };
  });
  return { ...panel, series };
}

function markCells(unseen: readonly string[][], mean: Float64Array, largestUnits: number): string[][] {
  return unseen.map((cell, h) =>
    mean[h]! > TIMES_LARGEST_SEEN * largestUnits ? [...cell, 'above-three-times-largest'] : cell,
  );
}

function standardise(panel: LinePanel, residuals: readonly Float64Array[], scales: NoiseScales): Float64Array[] {
  return panel.series.map((series, s) =>
    residuals[s]!.map((residual, t) => residual / scales[series.isPromoted[t] as 0 | 1][s]!),
  );
}

function quantilesByKind(
  panel: LinePanel,
  standardised: readonly Float64Array[],
): [DeviationQuantiles, DeviationQuantiles] {
  const of = (kind: 0 | 1): DeviationQuantiles => {
    const values: number[] = [];
    panel.series.forEach((series, s) => {
      for (let t = 0; t < panel.pastWeeks; t++) {
        const value = standardised[s]![t]!;
        if (!Number.isNaN(value) && series.isPromoted[t] === kind) values.push(value);
      }
    });
    return quantilesOfDeviations(Float64Array.from(values.length >= 20 ? values : [...values, -1.3, 1.3, -2, 2]));
  };
  return [of(0), of(1)];
}

/** Out-of-sample cells of the rolling origins beside the medians of the chosen average, recent level included. */
function rollCells(panel: LinePanel, frame: RollingFrame, { averaged, carry }: ChosenSpecification): RolledCell[] {
  if (frame.origins.length === 0) return [];
  const linear = carryForward(
    panel,
    frame,
    averageLinear(averaged.map((candidate) => candidate.linear)),
    averageResiduals(averaged),
    carry,
  );
  return Array.from(linear, (value, i) => {
    const week = frame.weekOf[i]!;
    const kind = panel.series[frame.seriesOf[i]!]!.isPromoted[week] as 0 | 1;
    return { week, kind, units: frame.units[i]!, median: Math.exp(value) };
  });
}

function collectErrors(
  panel: LinePanel,
  frame: RollingFrame,
  rolled: readonly RolledCell[],
  model: LineModel,
  scales: NoiseScales,
  influences: readonly Float64Array[],
): StandardisedError[] {
  return rolled.map(({ week, kind, units, median }, i): StandardisedError => {
    const s = frame.seriesOf[i]!;
    const variance = scales[kind][s]! ** 2 + coefficientVariance(model, model.columns, influences, panel, s, week);
    return {
      value: Math.log(Math.max(units / median, 0.02)) / Math.sqrt(variance),
      week,
      horizon: week - frame.origins[frame.originOf[i]!]!,
      kind,
    };
  });
}

import { buildAroundColumns, buildFreshCut } from '../features/around-columns.ts';
import type { Column } from '../features/column.ts';
import { dropUnusableColumns } from '../features/drop-columns.ts';
import type { LinePanel } from '../features/line-panel.ts';
import {
  averageUnits,
  buildAttraction,
  buildNeighbourPrice,
  buildNeighbourPromotion,
} from '../features/neighbour-columns.ts';
import { buildOwnColumns } from '../features/own-columns.ts';
import { buildHolidays, buildSeason, buildTrend, TREND } from '../features/season-columns.ts';
import type { Specification } from '../search/specification.ts';
import type { Finding, HolidayWeek } from '../types.ts';
import { estimateLine, linearPart, type FitTarget, type LineEstimate, type LineNoise } from './line-estimate.ts';
import { buildLogTarget } from './log-target.ts';
import { buildPoissonTarget } from './poisson-target.ts';

const POISSON_ROUNDS = 12;
const POISSON_ROUNDS_FROM_START = 3;
const POISSON_TOLERANCE = 1e-4;

/** Columns of a specification before the attraction of the neighbours, which takes a fit of its own. */
export interface ColumnSet {
  /** Price and promotion of the series itself. */
  own: Column[];
  /** Everything else but attraction. */
  further: Column[];
  findings: Finding[];
}

/** The columns of a specification that the line's history can carry; the others are named in findings. */
export function buildColumnSet(
  panel: LinePanel,
  holidays: readonly HolidayWeek[],
  specification: Specification,
): ColumnSet {
  const own = dropUnusableColumns(
    panel,
    buildOwnColumns(panel, specification.splitPrice, specification.advertisedPrice),
  );
  const further = buildFurtherColumns(panel, holidays, specification);
  const all = dropUnusableColumns(panel, [...own.kept, ...further]);
  return { own: own.kept, further: all.kept.filter((column) => !own.kept.includes(column)), findings: own.findings };
}

function buildFurtherColumns(
  panel: LinePanel,
  holidays: readonly HolidayWeek[],
  specification: Specification,
): Column[] {
  const weights = averageUnits(panel);
  const further: Column[] = [];
  if (specification.neighbourPrice) further.push(buildNeighbourPrice(panel, weights));
  if (specification.neighbourPromotion) further.push(buildNeighbourPromotion(panel, weights));
  if (specification.around) further.push(...buildAroundColumns(panel));
  if (specification.freshCut) further.push(buildFreshCut(panel));
  further.push(...buildSeason(panel, specification.fourierPairs));
  if (specification.holidays) further.push(...buildHolidays(panel, holidays));
  if (specification.trend) further.push(buildTrend(panel, panel.pastWeeks - 1));
  return further;
}

/** The columns of a fitted model as they are on another panel of the same line, such as one without the coming promotions. */
export function rebuildColumns(
  panel: LinePanel,
  holidays: readonly HolidayWeek[],
  specification: Specification,
  columns: readonly Column[],
): Column[] {
  const byName = new Map(
    [
      ...buildOwnColumns(panel, specification.splitPrice, specification.advertisedPrice),
      ...buildFurtherColumns(panel, holidays, specification),
    ].map((column) => [column.name, column]),
  );
  return columns.map((column) => byName.get(column.name) ?? column);
}

/** ln of a series' level, price and promotion by its own fit, per week of the axis; −∞ for a series without sales. */
export function fitOwnParts(panel: LinePanel, columns: readonly Column[], estimate: LineEstimate): Float64Array[] {
  return panel.series.map((_, s) => {
    const level = estimate.levels[s]!;
    const parts = new Float64Array(panel.weeks.length);
    for (let t = 0; t < parts.length; t++) {
      parts[t] = Number.isNaN(level) ? -Infinity : level + linearPart(columns, estimate.slopes[s]!, s, t);
    }
    return parts;
  });
}

export interface TargetedEstimate {
  estimate: LineEstimate;
  /** What the estimate was fitted to: ln units, or the last working response. */
  target: FitTarget;
}

export interface LineModel extends TargetedEstimate {
  columns: readonly Column[];
  /** The fit on own columns that the attraction of the neighbours was built from. */
  ownEstimate: LineEstimate | null;
}

/** A fit on all training weeks that fits on shorter stretches take their noise and, under Poisson, their first means from. */
export type ModelStart = Pick<LineModel, 'estimate' | 'ownEstimate' | 'columns'>;

/**
 * Fits a specification's columns on the used weeks up to `lastWeek`: least squares of ln units, or a Poisson pseudo-likelihood
 * where a listed week sold nothing. `start`: see ModelStart. `ownKnown`: the fit on own columns, where it is known already.
 */
export function fitLineModel(
  panel: LinePanel,
  columnSet: ColumnSet,
  specification: Specification,
  lastWeek: number,
  start?: ModelStart,
  ownKnown?: LineEstimate,
): LineModel {
  const estimateOn = (columns: readonly Column[], from: LineEstimate | null | undefined): TargetedEstimate =>
    panel.hasZeros
      ? estimatePoisson(panel, columns, specification, lastWeek, from ?? null)
      : estimateLog(panel, columns, specification, lastWeek, from?.noise);
  let ownEstimate: LineEstimate | null = null;
  const further =
    lastWeek === panel.pastWeeks - 1
      ? columnSet.further
      : columnSet.further.map((column) => (column.name === TREND ? buildTrend(panel, lastWeek) : column));
  const columns = [...columnSet.own, ...further];
  if (specification.attraction && panel.series.length > panel.locations.length) {
    ownEstimate = ownKnown ?? estimateOn(columnSet.own, start?.ownEstimate).estimate;
    columns.push(buildAttraction(panel, fitOwnParts(panel, columnSet.own, ownEstimate)));
  }
  return { columns, ...estimateOn(columns, start?.estimate), ownEstimate };
}

function estimateLog(
  panel: LinePanel,
  columns: readonly Column[],
  { halfLifeWeeks, spread }: Specification,
  lastWeek: number,
  noise: LineNoise | undefined,
): TargetedEstimate {
  const target = buildLogTarget(panel, halfLifeWeeks);
  return { estimate: estimateLine(panel, columns, target, lastWeek, spread, noise), target };
}

function estimatePoisson(
  panel: LinePanel,
  columns: readonly Column[],
  { halfLifeWeeks, spread }: Specification,
  lastWeek: number,
  from: LineEstimate | null,
): TargetedEstimate {
  const noise = from?.noise;
  let target = buildPoissonTarget(panel, halfLifeWeeks, from && fitOwnParts(panel, columns, from));
  let estimate = estimateLine(panel, columns, target, lastWeek, spread, noise);
  for (let round = 0; round < (from ? POISSON_ROUNDS_FROM_START : POISSON_ROUNDS); round++) {
    const before = estimate.slopes;
    target = buildPoissonTarget(panel, halfLifeWeeks, fitOwnParts(panel, columns, estimate));
    estimate = estimateLine(panel, columns, target, lastWeek, spread, noise);
    const moved = estimate.slopes.reduce(
      (most, slopes, s) => Math.max(most, ...slopes.map((slope, k) => Math.abs(slope - before[s]![k]!)), 0),
      0,
    );
    if (moved < POISSON_TOLERANCE) break;
  }
  return { estimate, target };
}

import { testLjungBox } from '../../../shared/statistics/diagnostics/autocorrelation.ts';
import {
  testBreuschPaganWithinSeries,
  type ChiSquareTest,
} from '../../../shared/statistics/diagnostics/breusch-pagan.ts';
import { analyseCondition, computeVarianceInflation } from '../../../shared/statistics/diagnostics/collinearity.ts';
import { computeDurbinWatsonBySeries } from '../../../shared/statistics/diagnostics/durbin-watson.ts';
import { computeCooksDistances } from '../../../shared/statistics/diagnostics/influence.ts';
import { StatisticsError } from '../../../shared/statistics/errors.ts';
import {
  computeClassicalCovariance,
  computeClusteredCovariance,
  computeHeteroskedasticCovariance,
  computeNeweyWestCovariance,
  computeStandardErrors,
  type CovarianceFit,
} from '../../../shared/statistics/regression/covariance.ts';
import { summariseFit } from '../../../shared/statistics/regression/fit-summary.ts';
import { fitLeastSquaresFast } from '../../../shared/statistics/regression/fast-least-squares.ts';
import type { LeastSquaresInput } from '../../../shared/statistics/regression/types.ts';
import type { EffectMember, FittedRows } from './fitted-rows.ts';
import { partialOutDeviations } from './line-slopes.ts';
import { describeEvidence, weighOwnEvidence, type EffectEvidence } from './own-evidence.ts';

/** Belsley, Kuh & Welsch 1980, 3.2: from this condition index on, with two variance shares above one half, effects can't be told apart. */
const INSEPARABLE_INDEX = 30;
const INSEPARABLE_SHARE = 0.5;
/** Condition indices from here on are kept with their shares; below, effects are hardly entangled. */
const TELLING_INDEX = 10;
const TELLING_SHARE = 0.2;
const INFLUENTIAL_ROWS = 10;

/** Standard errors of one coefficient; null where one isn't defined (a row of leverage 1, a single week). */
export interface FiveErrors {
  classical: number | null;
  hc1: number | null;
  hc3: number | null;
  /** Clustered by week. */
  week: number | null;
  /** Newey–West on week-summed scores. */
  neweyWest: number | null;
}

export interface DiagnosedEffect {
  name: string;
  group: string;
  estimate: number;
  errors: FiveErrors | null;
  varianceInflation: number | null;
  /** Effects that share a condition index ≥ 30 and a variance share > 0.5 with it. */
  inseparableFrom: string[];
  /** Null where all share the line's slope. */
  items: EffectEvidence | null;
  locations: EffectEvidence | null;
}

export interface InfluentialRow {
  item: string;
  location: string;
  weekStart: string;
  /** ln units. */
  residual: number;
  leverage: number;
  cooksDistance: number;
}

/** What an expert wants to know of a fit. Compact: it is stored with it. */
export interface FitDiagnosis {
  rows: number;
  series: number;
  items: number;
  weeks: number;
  /** Effective parameters: the trace of the hat matrix, one intercept per series included. */
  parameters: number;
  residualDegrees: number;
  /** Share of the (weighted) ups and downs within the series, and with the differences between series. */
  rSquaredWithin: number | null;
  adjustedRSquaredWithin: number | null;
  rSquared: number | null;
  adjustedRSquared: number | null;
  /** In R's conventions with the effective parameters; null under a pseudo-likelihood. */
  likelihood: { logLikelihood: number; aic: number; aicc: number | null; bic: number } | null;
  effects: DiagnosedEffect[];
  /** Lags of the Newey–West errors, in weeks. */
  neweyWestLag: number;
  /** Condition indices ascending; variance shares above 0.2 of those from 10 on and of the largest. */
  condition: { index: number; shares: { name: string; share: number }[] }[];
  durbinWatson: number | null;
  breuschPagan: ChiSquareTest | null;
  ljungBox: (ChiSquareTest & { lags: number }) | null;
  leverage: { threshold: number; above: number; largest: number };
  influential: InfluentialRow[];
}

/**
 * Diagnoses a fit with absorbed series intercepts and shrunken deviations. Errors are those of the line's slopes; inflation and condition are
 * properties of the line's columns centred within the series, unpenalised. Whatever isn't defined on these rows is null.
 * Parameters count the absorbed intercepts; checked against R's lm on explicit dummies (tests/reference/oj/B04_panel_*).
 */
export function diagnoseFit(rows: FittedRows): FitDiagnosis {
  const count = rows.residuals.length;
  const parameters = rows.leverages.reduce((sum, leverage) => sum + leverage, 0);
  const rss = rows.residuals.reduce((sum, residual, i) => sum + rows.weights[i]! * residual ** 2, 0);
  const residualDegrees = count - parameters;
  const standardised = rows.residuals.map((residual, i) => Math.sqrt(rows.weights[i]!) * residual);
  const weekCount = new Set(rows.weeks).size;
  const neweyWestLag = Math.floor(4 * (weekCount / 100) ** (2 / 9));
  const seriesCount = new Set(rows.series).size;
  const totalWithin = sumSquaresWithin(rows);
  const rSquaredWithin = totalWithin > 0 ? 1 - rss / totalWithin : null;
  const summary = orNull(() =>
    summariseFit(
      { design: rows.design, rows: count, columns: rows.columns, response: rows.response, weights: rows.weights },
      { ...rows, hatDiagonal: rows.leverages, residualSumOfSquares: rss, parameters },
      true,
    ),
  );
  const condition = describeCondition(rows);
  return {
    rows: count,
    series: seriesCount,
    items: new Set(Array.from(rows.series, (s) => rows.seriesOf[s]!.item)).size,
    weeks: weekCount,
    parameters,
    residualDegrees,
    rSquaredWithin,
    adjustedRSquaredWithin:
      rSquaredWithin !== null && residualDegrees > 0
        ? 1 - (1 - rSquaredWithin) * ((count - seriesCount) / residualDegrees)
        : null,
    rSquared: summary?.rSquared ?? null,
    adjustedRSquared: summary?.adjustedRSquared ?? null,
    likelihood:
      summary && !rows.isPseudoLikelihood
        ? { logLikelihood: summary.logLikelihood, aic: summary.aic, aicc: summary.aicc, bic: summary.bic }
        : null,
    effects: describeEffects(rows, parameters, rss, neweyWestLag, condition),
    neweyWestLag,
    condition: condition.table,
    durbinWatson: orNull(() => computeDurbinWatsonBySeries(standardised, rows.series, rows.weeks)),
    breuschPagan: orNull(() => {
      const line = lineColumns(rows);
      return testBreuschPaganWithinSeries(line.input, standardised, rows.series);
    }),
    ljungBox: testWeekMeans(rows, standardised),
    ...describeLeverage(rows, parameters, Math.sqrt(rss / residualDegrees)),
  };
}

/** The value, or null where the statistic isn't defined on these rows. */
function orNull<Value>(compute: () => Value): Value | null {
  try {
    return compute();
  } catch (error) {
    if (error instanceof StatisticsError) return null;
    throw error;
  }
}

function sumSquaresWithin({ series, response, weights, seriesOf }: FittedRows): number {
  const weightSums = new Float64Array(seriesOf.length);
  const sums = new Float64Array(seriesOf.length);
  series.forEach((s, i) => {
    weightSums[s]! += weights[i]!;
    sums[s]! += weights[i]! * response[i]!;
  });
  return series.reduce((total, s, i) => total + weights[i]! * (response[i]! - sums[s]! / weightSums[s]!) ** 2, 0);
}

/** The line's columns of the design by themselves, and the effect of each. */
function lineColumns({ design, columns, effects, residuals }: FittedRows): {
  input: LeastSquaresInput;
  effects: number[];
} {
  const own = effects.flatMap(({ column }, e) => (column === null ? [] : [{ column, e }]));
  const rows = residuals.length;
  const values = new Float64Array(rows * own.length);
  for (let i = 0; i < rows; i++) {
    own.forEach(({ column }, k) => (values[i * own.length + k] = design[i * columns + column]!));
  }
  return {
    input: { design: values, rows, columns: own.length, response: residuals },
    effects: own.map(({ e }) => e),
  };
}

interface Condition {
  table: FitDiagnosis['condition'];
  /** Per effect. */
  inseparableFrom: string[][];
  varianceInflation: (number | null)[];
}

function describeCondition(rows: FittedRows): Condition {
  const names = rows.effects.map(({ name }) => name);
  const inseparable = names.map(() => new Set<string>());
  const varianceInflation: (number | null)[] = names.map(() => null);
  const line = lineColumns(rows);
  const table = orNull((): FitDiagnosis['condition'] => {
    if (line.effects.length === 0) return [];
    const input = { ...line.input, weights: rows.weights };
    const fit = fitLeastSquaresFast(input);
    const effectOf = fit.kept.map((column) => line.effects[column]!);
    computeVarianceInflation(input, fit).forEach((factor, k) => (varianceInflation[effectOf[k]!] = factor));
    const { indices, proportions } = analyseCondition(fit);
    return indices.map((index, k) => {
      const shares = proportions[k]!.map((share, j) => ({ effect: effectOf[j]!, share }));
      const entangled = shares.filter(({ share }) => share > INSEPARABLE_SHARE);
      if (index >= INSEPARABLE_INDEX && entangled.length > 1) {
        for (const { effect } of entangled) {
          for (const other of entangled) if (other.effect !== effect) inseparable[effect]!.add(names[other.effect]!);
        }
      }
      const isTelling = index >= TELLING_INDEX || k === indices.length - 1;
      return {
        index,
        shares: isTelling
          ? shares
              .filter(({ share }) => share > TELLING_SHARE)
              .sort((a, b) => b.share - a.share)
              .map(({ effect, share }) => ({ name: names[effect]!, share }))
          : [],
      };
    });
  });
  return { table: table ?? [], inseparableFrom: inseparable.map((set) => [...set]), varianceInflation };
}

function describeEffects(
  rows: FittedRows,
  parameters: number,
  rss: number,
  neweyWestLag: number,
  condition: Condition,
): DiagnosedEffect[] {
  const errors = describeErrors(rows, parameters, rss, neweyWestLag);
  const itemWeights = weighMembers(rows, 'items', 'item');
  const locationWeights = weighMembers(rows, 'locations', 'location');
  return rows.effects.map((effect, e) => ({
    name: effect.name,
    group: effect.group,
    estimate: effect.estimate,
    errors: errors.get(e) ?? null,
    varianceInflation: condition.varianceInflation[e]!,
    inseparableFrom: condition.inseparableFrom[e]!,
    items: describeEvidence(effect.items, itemWeights),
    locations: describeEvidence(effect.locations, locationWeights),
  }));
}

/** Per effect with a slope in the fit, its standard errors of five kinds. */
function describeErrors(
  rows: FittedRows,
  parameters: number,
  rss: number,
  neweyWestLag: number,
): Map<number, FiveErrors> {
  const slopes = orNull(() => partialOutDeviations(rows));
  if (!slopes || slopes.effects.length === 0) return new Map();
  const width = slopes.effects.length;
  const input: LeastSquaresInput = {
    design: slopes.design,
    rows: rows.residuals.length,
    columns: width,
    response: rows.response,
    weights: rows.weights,
  };
  const fit: CovarianceFit = {
    rank: width,
    kept: slopes.effects.map((_, k) => k),
    factorR: slopes.factorR,
    residuals: rows.residuals,
    residualSumOfSquares: rss,
    hatDiagonal: rows.leverages,
    parameters,
  };
  const errorsOf = (compute: () => Float64Array): Float64Array | null =>
    orNull(() => computeStandardErrors(compute(), width));
  const kinds = {
    classical: errorsOf(() => computeClassicalCovariance(input, fit)),
    hc1: errorsOf(() => computeHeteroskedasticCovariance(input, fit, 'HC1')),
    hc3: errorsOf(() => computeHeteroskedasticCovariance(input, fit, 'HC3')),
    week: errorsOf(() => computeClusteredCovariance(input, fit, rows.weeks)),
    neweyWest: errorsOf(() =>
      computeNeweyWestCovariance(input, fit, { lag: neweyWestLag, isAdjusted: true, periods: rows.weeks }),
    ),
  };
  return new Map(
    slopes.effects.map((effect, k) => [
      effect,
      {
        classical: kinds.classical?.[k] ?? null,
        hc1: kinds.hc1?.[k] ?? null,
        hc3: kinds.hc3?.[k] ?? null,
        week: kinds.week?.[k] ?? null,
        neweyWest: kinds.neweyWest?.[k] ?? null,
      },
    ]),
  );
}

function weighMembers(rows: FittedRows, level: 'items' | 'locations', name: 'item' | 'location'): Map<number, number> {
  const names = [...new Set(rows.seriesOf.map((series) => series[name]))];
  const columnsOf = names.map((member) =>
    rows.effects.flatMap((effect) =>
      effect[level].filter((one: EffectMember) => one.name === member && one.column !== null).map((one) => one.column!),
    ),
  );
  const memberOf = Int32Array.from(rows.series, (s) => names.indexOf(rows.seriesOf[s]![name]));
  return weighOwnEvidence(rows, memberOf, columnsOf);
}

/**
 * Ljung–Box on the mean standardised residual of each week, which is what the series share. A week nobody sold in counts as average. Lags: the
 * smaller of 10 and a fifth of the weeks (Hyndman & Athanasopoulos 2021, 5.4); null under 10 weeks.
 */
function testWeekMeans({ weeks }: FittedRows, standardised: Float64Array): FitDiagnosis['ljungBox'] {
  if (weeks.length === 0) return null;
  const first = weeks.reduce((a, b) => Math.min(a, b));
  const length = weeks.reduce((a, b) => Math.max(a, b)) - first + 1;
  if (length < 10) return null;
  const sums = new Float64Array(length);
  const counts = new Float64Array(length);
  weeks.forEach((week, i) => {
    sums[week - first]! += standardised[i]!;
    counts[week - first]!++;
  });
  const means = sums.map((sum, t) => (counts[t]! > 0 ? sum / counts[t]! : Number.NaN));
  const seen = means.filter((mean) => !Number.isNaN(mean));
  const average = seen.reduce((sum, mean) => sum + mean, 0) / seen.length;
  const lags = Math.min(10, Math.floor(length / 5));
  return orNull(() => ({
    ...testLjungBox(
      means.map((mean) => (Number.isNaN(mean) ? average : mean)),
      lags,
    ),
    lags,
  }));
}

function describeLeverage(
  rows: FittedRows,
  parameters: number,
  sigma: number,
): Pick<FitDiagnosis, 'leverage' | 'influential'> {
  const { leverages, residuals, series, seriesOf, weeks, weekStarts } = rows;
  const threshold = (2 * parameters) / leverages.length;
  const distances = orNull(() => computeCooksDistances(rows, parameters, sigma)) ?? [];
  const influential = distances
    .flatMap((cooksDistance, i) =>
      cooksDistance === null || !Number.isFinite(cooksDistance) ? [] : [{ cooksDistance, i }],
    )
    .sort((a, b) => b.cooksDistance - a.cooksDistance)
    .slice(0, INFLUENTIAL_ROWS)
    .map(({ cooksDistance, i }) => ({
      ...seriesOf[series[i]!]!,
      weekStart: weekStarts[weeks[i]!]!,
      residual: residuals[i]!,
      leverage: leverages[i]!,
      cooksDistance,
    }));
  return {
    leverage: {
      threshold,
      above: leverages.filter((leverage) => leverage > threshold).length,
      largest: leverages.reduce((a, b) => Math.max(a, b), 0),
    },
    influential,
  };
}

import { buildLinePanel, switchOffComingPromotions, type LinePanel } from './features/line-panel.ts';
import { reportFit } from './fit/fit-report.ts';
import { isIntermittent } from './fit/intermittent.ts';
import { keepFit, type KeptFit } from './fit/kept-fit.ts';
import { slopesBySeries } from './fit/shrunken-slopes.ts';
import { buildColumnSet, fitLineModel, type LineModel } from './fit/line-model.ts';
import { computeRecentLevels, type CarryRule } from './fit/recent-level.ts';
import { prepareComingColumns, type ComingColumns } from './prediction/coming-columns.ts';
import { predictSeries, type PredictedSeries } from './prediction/predicted-parts.ts';
import { computeSmearing } from './prediction/smearing.ts';
import { forecastIntermittent, forecastSimpleAverage, type PlainForecast } from './prediction/plain-forecasts.ts';
import { computeWeekInfluences, drawCoefficientDeviations } from './ranges/coefficient-draws.ts';
import { summarisePaths, type UnitPaths } from './ranges/path-quantiles.ts';
import { createNormal, createRandom } from './ranges/random.ts';
import { drawResidualPaths } from './ranges/residual-paths.ts';
import type { Specification } from './search/specification.ts';
import type {
  Finding,
  LineFit,
  LineForecast,
  LineInput,
  SeriesForecast,
  SeriesMethod,
  TotalForecast,
} from './types.ts';

const PATHS = 1000;
/** A series with fewer used weeks gets a simple average; so does every series of a line with fewer used rows or weeks. */
const FEWEST_WEEKS_OF_SERIES = 6;
const FEWEST_ROWS_OF_LINE = 20;
const FEWEST_WEEKS_OF_LINE = 10;
const TIMES_LARGEST_SEEN = 3;

export const plainSpecification: Specification = {
  splitPrice: false,
  neighbourPrice: true,
  neighbourPromotion: true,
  attraction: true,
  around: false,
  fourierPairs: 0,
  holidays: true,
  trend: false,
  halfLifeWeeks: 52,
};
export const plainCarry: CarryRule = { halfLifeWeeks: 6, priorWeeks: 4, decayPerWeek: 0.95 };

/** What a caller may fix instead of leaving it to the arithmetic. */
export interface ForecastChoice {
  specification?: Specification;
  carry?: CarryRule;
}

/** Forecast of one series before its ranges: means, base and parts, per week of the horizon. */
interface SeriesCentre {
  method: SeriesMethod;
  mean: Float64Array;
  median: Float64Array | null;
  base: Float64Array;
  marks: string[][];
  parts: Record<string, Float64Array>;
}

/**
 * Forecasts one product line: fits it on the sales up to the origin, forecasts every series over the horizon from the plan, and
 * simulates joint paths for the ranges of series and totals. Deterministic for a given input and seed; reads no clock, so
 * `fit.seconds` is 0 and whoever times the call fills it in.
 * Throws RangeError for an empty line or a horizon below 1.
 */
export function forecastLine(input: LineInput, choice: ForecastChoice = {}): LineForecast {
  if (input.series.length === 0) throw new RangeError('a line without series has nothing to forecast');
  if (!(Number.isInteger(input.horizon) && input.horizon > 0))
    throw new RangeError('the horizon must be at least 1 week');
  const panel = buildLinePanel(input);
  const findings: Finding[] = [...panel.findings];
  const methods = chooseMethods(panel, findings);
  const fitPanel = restrictToRegression(panel, methods);
  const centres = new Array<SeriesCentre>(panel.series.length);
  const paths: UnitPaths = {
    values: new Float64Array(PATHS * panel.series.length * panel.horizon),
    paths: PATHS,
  };
  let fit: LineFit | null = null;
  if (methods.includes('regression')) fit = forecastByRegression(fitPanel, input, choice, centres, paths, findings);
  methods.forEach((method, s) => {
    if (method === 'regression') return;
    const plain: PlainForecast =
      method === 'intermittent'
        ? forecastIntermittent(panel, s, PATHS, input.seed)
        : forecastSimpleAverage(panel, s, PATHS, input.seed);
    centres[s] = plainCentre(panel, method, plain);
    for (let path = 0; path < PATHS; path++) {
      for (let h = 0; h < panel.horizon; h++) {
        paths.values[(path * panel.series.length + s) * panel.horizon + h] = plain.paths[path * panel.horizon + h]!;
      }
    }
  });
  clearOutsideListing(panel, centres, paths);
  const series = panel.series.map((_, s) => finishSeries(panel, s, centres[s]!, paths));
  return { fit, series, totals: summariseTotals(panel, series, paths), findings };
}

function chooseMethods(panel: LinePanel, findings: Finding[]): SeriesMethod[] {
  const methods = panel.series.map((series): SeriesMethod => {
    if (series.usedWeeks < FEWEST_WEEKS_OF_SERIES || series.largestUnits === 0) return 'simple-average';
    return isIntermittent(panel, series) ? 'intermittent' : 'regression';
  });
  const weeks = new Set<number>();
  let rows = 0;
  panel.series.forEach((series, s) => {
    if (methods[s] !== 'regression') return;
    for (let t = 0; t < panel.pastWeeks; t++) {
      if (!series.isUsed[t]) continue;
      weeks.add(t);
      rows++;
    }
  });
  if (rows < FEWEST_ROWS_OF_LINE || weeks.size < FEWEST_WEEKS_OF_LINE) {
    methods.forEach((method, s) => {
      if (method === 'regression') methods[s] = 'simple-average';
    });
    findings.push({ kind: 'line-too-thin', values: { rows, weeks: weeks.size } });
  }
  panel.series.forEach((series, s) => {
    const place = { item: series.input.item, location: series.input.location };
    if (methods[s] === 'simple-average') {
      findings.push({ kind: 'series-too-thin', ...place, values: { weeks: series.usedWeeks } });
    } else if (methods[s] === 'intermittent') {
      findings.push({ kind: 'series-intermittent', ...place });
    }
  });
  return methods;
}

/** The same panel in which only series forecast by regression bring rows to the fit. */
function restrictToRegression(panel: LinePanel, methods: readonly SeriesMethod[]): LinePanel {
  let hasZeros = false;
  const series = panel.series.map((one, s) => {
    if (methods[s] !== 'regression') return { ...one, isUsed: new Uint8Array(one.isUsed.length), usedWeeks: 0 };
    for (let t = 0; t < panel.pastWeeks; t++) if (one.isUsed[t] && one.units[t] === 0) hasZeros = true;
    return one;
  });
  return { ...panel, series, hasZeros };
}

function forecastByRegression(
  panel: LinePanel,
  input: LineInput,
  choice: ForecastChoice,
  centres: SeriesCentre[],
  paths: UnitPaths,
  findings: Finding[],
): LineFit {
  const specification = choice.specification ?? plainSpecification;
  const carry = choice.carry ?? plainCarry;
  const lastWeek = panel.pastWeeks - 1;
  const columnSet = buildColumnSet(panel, input.holidays, specification);
  const model = fitLineModel(panel, columnSet, specification, lastWeek);
  const kept = keepFit(panel, model.estimate, model.target, lastWeek);
  const residuals = residualsByWeek(panel, kept);
  const planned = prepareComingColumns(panel, input.holidays, specification, model);
  const unpromoted = prepareComingColumns(
    switchOffComingPromotions(panel),
    input.holidays,
    specification,
    model,
  ).columns;
  const levels = computeRecentLevels(panel, residuals, lastWeek, carry);
  const smearing = panel.hasZeros ? { promoted: 1, other: 1 } : computeSmearing(panel, residuals);
  const predicted = new Array<PredictedSeries>(panel.series.length);
  panel.series.forEach((series, s) => {
    if (series.usedWeeks === 0) return;
    const predict = (columns: ComingColumns['columns'], isPromoted: boolean): PredictedSeries =>
      predictSeries(panel, s, columns, kept.slopes[s]!, kept.levels[s]!, model.estimate.moments[s]!, (h) => {
        const useful = isPromoted && series.isPromoted[panel.pastWeeks + h] ? levels.promoted[s]! : levels.other[s]!;
        return useful * carry.decayPerWeek ** h;
      });
    const plan = predict(planned.columns, true);
    const base = predict(unpromoted, false);
    predicted[s] = plan;
    const mean = plan.linear.map((value, h) => {
      const factor = series.isPromoted[panel.pastWeeks + h] ? smearing.promoted : smearing.other;
      return Math.exp(value) * factor;
    });
    centres[s] = {
      method: panel.hasZeros ? 'poisson' : 'regression',
      mean,
      median: panel.hasZeros ? null : plan.linear.map(Math.exp),
      base: base.linear.map((value) => Math.exp(value) * smearing.other),
      marks: planned.marks[s]!.map((cell, h) =>
        mean[h]! > TIMES_LARGEST_SEEN * series.largestUnits ? [...cell, 'above-three-times-largest'] : cell,
      ),
      parts: plan.parts,
    };
  });
  const influences = computeWeekInfluences(model.estimate, kept);
  simulatePaths(panel, model, planned.columns, predicted, residuals, influences, input.seed, paths);
  findings.push(...columnSet.findings);
  for (const { column, item, location } of model.estimate.wrongSigns) {
    findings.push({
      kind: item === null && location === null ? 'wrong-sign-line' : 'wrong-sign-own',
      ...(item === null ? {} : { item }),
      ...(location === null ? {} : { location }),
      values: { column },
    });
  }
  return reportFit(panel, specification, model, kept, influences, [], findings);
}

/** Leave-one-out residuals per series and week in ln units; for a Poisson fit ln of (units ÷ mean), of the working residual. */
function residualsByWeek(panel: LinePanel, kept: KeptFit): Float64Array[] {
  const residuals = panel.series.map(() => new Float64Array(panel.pastWeeks).fill(Number.NaN));
  kept.rows.forEach(({ series, week }, i) => {
    const residual = kept.leaveOneOut[i]!;
    residuals[series]![week] = panel.hasZeros ? Math.log(Math.max(1 + residual, 0.05)) : residual;
  });
  return residuals;
}

function simulatePaths(
  panel: LinePanel,
  model: LineModel,
  columns: ComingColumns['columns'],
  predicted: readonly PredictedSeries[],
  residuals: readonly Float64Array[],
  influences: readonly Float64Array[],
  seed: number,
  { values, paths }: UnitPaths,
): void {
  const { layout, moments } = model.estimate;
  const { horizon, pastWeeks } = panel;
  const count = panel.series.length;
  const drawn = drawResidualPaths(panel, residuals, paths, seed);
  const drawNormal = createNormal(createRandom(seed + 1));
  for (let path = 0; path < paths; path++) {
    const slopes = slopesBySeries(panel, layout, drawCoefficientDeviations(influences, layout.size, drawNormal));
    for (let s = 0; s < count; s++) {
      const plan = predicted[s];
      if (!plan) continue;
      const own = slopes[s]!;
      const { columnMeans } = moments[s]!;
      for (let h = 0; h < horizon; h++) {
        const at = (path * count + s) * horizon + h;
        let deviation = drawn[at]!;
        for (let k = 0; k < own.length; k++) {
          deviation += own[k]! * (columns[k]!.values[s]![pastWeeks + h]! - columnMeans[k]!);
        }
        values[at] = Math.exp(plan.linear[h]! + deviation);
      }
    }
  }
}

function plainCentre(panel: LinePanel, method: SeriesMethod, plain: PlainForecast): SeriesCentre {
  const mean = new Float64Array(panel.horizon).fill(plain.mean);
  return {
    method,
    mean,
    median: null,
    base: mean.slice(),
    marks: Array.from({ length: panel.horizon }, () => []),
    parts: plain.mean > 0 ? { level: mean.map(Math.log) } : {},
  };
}

function clearOutsideListing(panel: LinePanel, centres: SeriesCentre[], paths: UnitPaths): void {
  const count = panel.series.length;
  panel.series.forEach(({ input }, s) => {
    let listedWeeks = 0;
    for (let h = 0; h < panel.horizon; h++) {
      const weekStart = panel.weeks[panel.pastWeeks + h]!;
      const isListed =
        (input.listedFrom === null || weekStart >= input.listedFrom) &&
        (input.listedTo === null || weekStart <= input.listedTo);
      if (isListed) {
        listedWeeks++;
        continue;
      }
      const centre = centres[s]!;
      centre.mean[h] = 0;
      centre.base[h] = 0;
      if (centre.median) centre.median[h] = 0;
      centre.marks[h] = ['outside-listing'];
      for (let path = 0; path < paths.paths; path++) paths.values[(path * count + s) * panel.horizon + h] = 0;
    }
    if (listedWeeks === 0) centres[s]!.method = 'not-listed';
  });
}

function finishSeries(panel: LinePanel, s: number, centre: SeriesCentre, paths: UnitPaths): SeriesForecast {
  const { item, location } = panel.series[s]!.input;
  const ranges = summarisePaths(panel, paths, [s]);
  const { method, mean, base, marks, parts } = centre;
  const p50 = centre.median ?? ranges.p50;
  return {
    item,
    location,
    method,
    mean,
    base,
    p2_5: ranges.p2_5.map((value, h) => Math.min(value, p50[h]!)),
    p10: ranges.p10.map((value, h) => Math.min(value, p50[h]!)),
    p50,
    p90: ranges.p90.map((value, h) => Math.max(value, p50[h]!)),
    p97_5: ranges.p97_5.map((value, h) => Math.max(value, p50[h]!)),
    marks,
    parts,
  };
}

function summariseTotals(panel: LinePanel, series: readonly SeriesForecast[], paths: UnitPaths): TotalForecast[] {
  const total = (scope: TotalForecast['scope'], of: string | null, isMember: (s: number) => boolean): TotalForecast => {
    const members = panel.series.map((_, s) => s).filter(isMember);
    const mean = new Float64Array(panel.horizon);
    for (const s of members) for (let h = 0; h < panel.horizon; h++) mean[h]! += series[s]!.mean[h]!;
    return { scope, of, mean, ...summarisePaths(panel, paths, members) };
  };
  return [
    total('line', null, () => true),
    ...panel.items.map((item, i) => total('item', item, (s) => panel.series[s]!.item === i)),
    ...panel.locations.map((location, l) => total('location', location, (s) => panel.series[s]!.location === l)),
  ];
}

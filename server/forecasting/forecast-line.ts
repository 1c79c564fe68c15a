import { buildLinePanel, type LinePanel } from './features/line-panel.ts';
import { isIntermittent } from './fit/intermittent.ts';
import { forecastByRegression, type SearchChoice, type SeriesCentre } from './prediction/forecast-by-regression.ts';
import { forecastIntermittent, forecastSimpleAverage, type PlainForecast } from './prediction/plain-forecasts.ts';
import { summarisePaths, type UnitPaths } from './ranges/path-quantiles.ts';
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

/**
 * Forecasts one product line: fits it on the sales up to the origin, forecasts every series over the horizon from the plan, and
 * simulates joint paths for the ranges of series and totals. Deterministic for a given input and seed; reads no clock, so
 * `fit.seconds` is 0 and whoever times the call fills it in.
 * Throws RangeError for an empty line or a horizon below 1.
 */
export function forecastLine(input: LineInput, choice: SearchChoice = {}): LineForecast {
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

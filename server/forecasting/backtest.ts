import { weekdayOf, weeksBetween } from '../../shared/domain/weeks.ts';
import {
  CanonicalFileError,
  parseTradingWeek,
  type CanonicalCalendarRow,
  type CanonicalSalesRow,
} from './canonical-sales.ts';
import { forecastBenchmarks, type BenchmarkForecasts } from './forecast-naive.ts';
import { forecastLine } from './forecast-line.ts';
import type { LineForecast, LineInput, PlannedWeek, SeriesInput, SoldWeek } from './types.ts';

const SEED = 20_240_117;

/** Sales rows of one line, by series, each in week order. */
export interface LineHistory {
  line: string;
  series: { item: string; location: string; rows: CanonicalSalesRow[] }[];
}

/** Groups sales rows by line and series. A later row for the same series and week replaces an earlier one. */
export function groupByLine(rows: readonly CanonicalSalesRow[]): LineHistory[] {
  const lines = new Map<string, Map<string, Map<string, CanonicalSalesRow>>>();
  for (const row of rows) {
    const series = lines.get(row.line) ?? new Map<string, Map<string, CanonicalSalesRow>>();
    lines.set(row.line, series);
    const key = JSON.stringify([row.item, row.location]);
    const weeks = series.get(key) ?? new Map<string, CanonicalSalesRow>();
    series.set(key, weeks);
    weeks.set(row.sold.weekStart, row);
  }
  return [...lines].map(([line, series]) => ({
    line,
    series: [...series.values()].map((weeks) => {
      const sorted = [...weeks.values()].sort((a, b) => (a.sold.weekStart < b.sold.weekStart ? -1 : 1));
      return { item: sorted[0]!.item, location: sorted[0]!.location, rows: sorted };
    }),
  }));
}

/**
 * What may be known of a line at an origin: the sales up to it, and of the weeks after it what a plan would hold: price, regular
 * price, feature, display, mechanics, and whatever the calendar states. Series first seen after the origin aren't known.
 */
export function hideAfterOrigin(
  history: LineHistory,
  calendar: readonly CanonicalCalendarRow[],
  origin: string,
  horizon: number,
): LineInput {
  const series: SeriesInput[] = [];
  for (const { item, location, rows } of history.series) {
    const sold = rows.filter((row) => row.sold.weekStart <= origin).map((row) => row.sold);
    if (sold.length === 0) continue;
    const planned = new Map<string, PlannedWeek>();
    for (const row of rows) if (row.sold.weekStart > origin) planned.set(row.sold.weekStart, planOf(row));
    for (const row of calendar) {
      if (row.item !== item || row.location !== location || row.planned.weekStart <= origin) continue;
      if (row.line !== history.line) continue;
      const known = planned.get(row.planned.weekStart);
      planned.set(row.planned.weekStart, known ? overlayPlan(known, row.planned) : row.planned);
    }
    series.push({
      item,
      location,
      unitStep: 1,
      sold,
      planned: [...planned.values()].sort((a, b) => (a.weekStart < b.weekStart ? -1 : 1)),
      listedFrom: null,
      listedTo: null,
    });
  }
  return { line: history.line, series, holidays: [], origin, horizon, seed: SEED };
}

function planOf({ sold, statedPrice }: CanonicalSalesRow): PlannedWeek {
  return {
    weekStart: sold.weekStart,
    price: statedPrice,
    regularPrice: sold.regularPrice,
    depth: Number.NaN,
    feature: sold.feature,
    display: sold.display,
    mechanics: sold.mechanics,
  };
}

function overlayPlan(base: PlannedWeek, over: PlannedWeek): PlannedWeek {
  const pick = (value: number, otherwise: number): number => (Number.isNaN(value) ? otherwise : value);
  return {
    weekStart: base.weekStart,
    price: pick(over.price, base.price),
    regularPrice: pick(over.regularPrice, base.regularPrice),
    depth: pick(over.depth, base.depth),
    feature: pick(over.feature, base.feature),
    display: pick(over.display, base.display),
    mechanics: { ...base.mechanics, ...over.mechanics },
  };
}

/**
 * The last `count` origins that leave a whole horizon after them, four weeks apart; or the ones named, each an ISO week or a date.
 * Throws CanonicalFileError for a name that is no week, or one before or after all sales.
 */
export function chooseOrigins(rows: readonly CanonicalSalesRow[], origins: string, horizon: number): string[] {
  const weeks = [...new Set(rows.map((row) => row.sold.weekStart))].sort();
  if (weeks.length === 0) throw new CanonicalFileError('the sales file has no rows');
  if (!/^\d+$/.test(origins)) {
    return origins.split(',').map((name) => {
      const origin = parseTradingWeek(name.trim(), weekdayOf(weeks[0]!));
      if (origin === null) throw new CanonicalFileError(`origin "${name.trim()}" is neither an ISO week nor a date`);
      if (origin < weeks[0]! || origin > weeks.at(-1)) {
        throw new CanonicalFileError(`origin ${origin} lies outside the sales, ${weeks[0]!} to ${weeks.at(-1)}`);
      }
      return origin;
    });
  }
  const last = weeks.length - 1 - horizon;
  const chosen: string[] = [];
  for (let at = last; at >= 0 && chosen.length < Number(origins); at -= 4) chosen.push(weeks[at]!);
  return chosen.reverse();
}

/** One scored cell: a series' week, or the line's total where item and location are empty. */
export interface BacktestCell extends BenchmarkForecastsOfCell {
  line: string;
  item: string;
  location: string;
  origin: string;
  horizon: number;
  week: string;
  actual: number;
  mean: number;
  p2_5: number;
  p10: number;
  p50: number;
  p90: number;
  p97_5: number;
  isPromoted: boolean;
}

type BenchmarkForecastsOfCell = { [K in keyof BenchmarkForecasts]: number };

export interface BacktestResult {
  cells: BacktestCell[];
  totals: BacktestCell[];
  secondsPerLine: number;
}

/** Runs every line at every origin and puts each week sold after it beside its forecast. `now` gives seconds. */
export function runBacktest(
  lines: readonly LineHistory[],
  calendar: readonly CanonicalCalendarRow[],
  origins: readonly string[],
  horizon: number,
  now: () => number,
  report: (line: string, origin: string, seconds: number, forecast: LineForecast) => void = () => {},
  forecastOf: (input: LineInput) => LineForecast = forecastLine,
): BacktestResult {
  const cells: BacktestCell[] = [];
  const totals: BacktestCell[] = [];
  let seconds = 0;
  let runs = 0;
  for (const history of lines) {
    for (const origin of origins) {
      const input = hideAfterOrigin(history, calendar, origin, horizon);
      if (input.series.length === 0) continue;
      const start = now();
      const forecast = forecastOf(input);
      const taken = now() - start;
      seconds += taken;
      runs++;
      report(history.line, origin, taken, forecast);
      scoreOrigin(history, input, forecast, cells, totals);
    }
  }
  return { cells, totals, secondsPerLine: runs > 0 ? seconds / runs : 0 };
}

function scoreOrigin(
  history: LineHistory,
  input: LineInput,
  forecast: LineForecast,
  cells: BacktestCell[],
  totals: BacktestCell[],
): void {
  const { origin, horizon } = input;
  const lineActual = new Float64Array(horizon);
  const lineBenchmarks = Array.from({ length: horizon }, () => ({ naive: 0, seasonalNaive: 0, eightWeekMean: 0 }));
  const isPromoted = new Array<boolean>(horizon).fill(false);
  const known = new Array<number>(horizon).fill(0);
  forecast.series.forEach((series) => {
    const rows = history.series.find((one) => one.item === series.item && one.location === series.location)!.rows;
    const past: SoldWeek[] = rows.filter((row) => row.sold.weekStart <= origin).map((row) => row.sold);
    const benchmarks = forecastBenchmarks(past, origin, horizon);
    for (const { sold } of rows) {
      const h = weeksBetween(origin, sold.weekStart) - 1;
      if (h < 0 || h >= horizon || !(sold.units >= 0) || sold.gap > 0.15) continue;
      const promoted = isPromotedWeek(sold);
      cells.push({
        line: history.line,
        item: series.item,
        location: series.location,
        origin,
        horizon: h + 1,
        week: sold.weekStart,
        actual: sold.units,
        mean: series.mean[h]!,
        p2_5: series.p2_5[h]!,
        p10: series.p10[h]!,
        p50: series.p50[h]!,
        p90: series.p90[h]!,
        p97_5: series.p97_5[h]!,
        naive: benchmarks.naive[h]!,
        seasonalNaive: benchmarks.seasonalNaive[h]!,
        eightWeekMean: benchmarks.eightWeekMean[h]!,
        isPromoted: promoted,
      });
      lineActual[h]! += sold.units;
      lineBenchmarks[h]!.naive += benchmarks.naive[h]!;
      lineBenchmarks[h]!.seasonalNaive += benchmarks.seasonalNaive[h]!;
      lineBenchmarks[h]!.eightWeekMean += benchmarks.eightWeekMean[h]!;
      isPromoted[h] ||= promoted;
      known[h]!++;
    }
  });
  const total = forecast.totals.find((one) => one.scope === 'line');
  if (!total) return;
  for (let h = 0; h < horizon; h++) {
    if (known[h] !== forecast.series.length) continue;
    totals.push({
      line: history.line,
      item: '',
      location: '',
      origin,
      horizon: h + 1,
      week: weekAt(history, origin, h + 1),
      actual: lineActual[h]!,
      mean: total.mean[h]!,
      p2_5: total.p2_5[h]!,
      p10: total.p10[h]!,
      p50: total.p50[h]!,
      p90: total.p90[h]!,
      p97_5: total.p97_5[h]!,
      ...lineBenchmarks[h]!,
      isPromoted: isPromoted[h]!,
    });
  }
}

function weekAt(history: LineHistory, origin: string, steps: number): string {
  for (const { rows } of history.series) {
    for (const { sold } of rows) if (weeksBetween(origin, sold.weekStart) === steps) return sold.weekStart;
  }
  return origin;
}

export function isPromotedWeek(week: Pick<SoldWeek, 'feature' | 'display' | 'mechanics'>): boolean {
  return week.feature > 0 || week.display > 0 || Object.values(week.mechanics).some((share) => share > 0);
}

import { addWeeks, listWeeks, weeksBetween } from '../../../shared/domain/weeks.ts';
import type { Finding, LineInput, SeriesInput } from '../types.ts';
import { inferRegularPrice } from './regular-price.ts';

/** Weeks with a larger share of empty shelf are left out: their sales are censored, not low. */
const LARGEST_GAP_SHARE = 0.15;

/** One series on the common week axis; arrays have one value per week of the axis unless said otherwise. */
export interface PanelSeries {
  item: number;
  location: number;
  input: SeriesInput;
  /** 1 where the week's units enter the fit; 0 after the origin. */
  isUsed: Uint8Array;
  /** 1 where the week was listed in the sales, used or not. */
  isSold: Uint8Array;
  /** Units as sold; 0 where unknown. */
  units: Float64Array;
  /** ln(days open / 7); 0 for whole weeks. */
  offset: Float64Array;
  lnRegular: Float64Array;
  /** ln(price paid / regular price). */
  lnDepth: Float64Array;
  feature: Float64Array;
  display: Float64Array;
  mechanics: Float64Array[];
  isPromoted: Uint8Array;
  /** Weight of the week's row, 1 unless it lies far from what its neighbours in time let expect (outlier-weights.ts). */
  trust: Float64Array;
  usedWeeks: number;
  largestUnits: number;
}

export interface LinePanel {
  line: string;
  /** Week starts from the first sold week to the last forecast week, without holes. */
  weeks: readonly string[];
  /** Number of weeks up to and including the origin. */
  pastWeeks: number;
  horizon: number;
  items: readonly string[];
  locations: readonly string[];
  mechanicNames: readonly string[];
  series: PanelSeries[];
  hasZeros: boolean;
  findings: Finding[];
}

/**
 * Puts the sales up to the origin and the plan after it on one week axis. Nothing sold after the origin is read.
 * A price that a week lacks is the last one known; a promotion that a week lacks is none.
 */
export function buildLinePanel(input: LineInput): LinePanel {
  const findings: Finding[] = [];
  const sold = input.series.map((series) => series.sold.filter((week) => week.weekStart <= input.origin));
  let first = input.origin;
  for (const weeks of sold) for (const week of weeks) if (week.weekStart < first) first = week.weekStart;
  const pastWeeks = weeksBetween(first, input.origin) + 1;
  const weeks = listWeeks(first, pastWeeks + input.horizon);
  const items = [...new Set(input.series.map((series) => series.item))].sort();
  const locations = [...new Set(input.series.map((series) => series.location))].sort();
  const names = new Set<string>();
  sold.forEach((rows) => rows.forEach((week) => Object.keys(week.mechanics).forEach((name) => names.add(name))));
  input.series.forEach((series) =>
    series.planned.forEach((week) => Object.keys(week.mechanics).forEach((name) => names.add(name))),
  );
  const mechanicNames = [...names].sort();
  const lastWeek = addWeeks(input.origin, input.horizon);

  let hasZeros = false;
  const series = input.series.map((seriesInput, index): PanelSeries => {
    const length = weeks.length;
    const price = new Float64Array(length).fill(Number.NaN);
    const givenRegular = new Float64Array(length).fill(Number.NaN);
    const plannedDepth = new Float64Array(length).fill(Number.NaN);
    const panel: PanelSeries = {
      item: items.indexOf(seriesInput.item),
      location: locations.indexOf(seriesInput.location),
      input: seriesInput,
      isUsed: new Uint8Array(length),
      isSold: new Uint8Array(length),
      units: new Float64Array(length),
      offset: new Float64Array(length),
      lnRegular: new Float64Array(length),
      lnDepth: new Float64Array(length),
      feature: new Float64Array(length),
      display: new Float64Array(length),
      mechanics: mechanicNames.map(() => new Float64Array(length)),
      isPromoted: new Uint8Array(length),
      trust: new Float64Array(length).fill(1),
      usedWeeks: 0,
      largestUnits: 0,
    };
    for (const week of sold[index]!) {
      const t = weeksBetween(first, week.weekStart);
      setPromotion(panel, t, week, mechanicNames);
      if (week.price > 0) price[t] = week.price;
      if (week.regularPrice > 0) givenRegular[t] = week.regularPrice;
      if (!Number.isFinite(week.units)) continue;
      panel.isSold[t] = 1;
      panel.units[t] = week.units;
      const values = { week: week.weekStart, units: week.units };
      const place = { item: seriesInput.item, location: seriesInput.location };
      if (week.units < 0) {
        findings.push({ kind: 'negative-week-left-out', ...place, values });
      } else if (week.gap > LARGEST_GAP_SHARE) {
        findings.push({ kind: 'gap-week-left-out', ...place, values: { ...values, gap: week.gap } });
      } else if (week.daysOpen <= 0) {
        findings.push({ kind: 'closed-week-left-out', ...place, values });
      } else {
        panel.isUsed[t] = 1;
        panel.usedWeeks++;
        if (week.daysOpen < 7) panel.offset[t] = Math.log(week.daysOpen / 7);
        if (week.units === 0) hasZeros = true;
        if (week.units > panel.largestUnits) panel.largestUnits = week.units;
      }
    }
    for (const week of seriesInput.planned) {
      if (week.weekStart <= input.origin || week.weekStart > lastWeek) continue;
      const t = weeksBetween(first, week.weekStart);
      setPromotion(panel, t, week, mechanicNames);
      if (week.price > 0) price[t] = week.price;
      if (week.regularPrice > 0) givenRegular[t] = week.regularPrice;
      if (week.depth > 0) {
        plannedDepth[t] = Math.min(week.depth, 0.99);
        panel.isPromoted[t] = 1;
      }
    }
    const { regular, inferredWeeks } = inferRegularPrice(price, givenRegular, panel.isPromoted);
    if (inferredWeeks > 0) {
      findings.push({
        kind: 'regular-price-inferred',
        item: seriesInput.item,
        location: seriesInput.location,
        values: { weeks: inferredWeeks },
      });
    }
    for (let t = 0; t < length; t++) {
      if (!(regular[t]! > 0)) continue;
      panel.lnRegular[t] = Math.log(regular[t]!);
      if (price[t]! > 0) panel.lnDepth[t] = Math.log(price[t]! / regular[t]!);
      else if (plannedDepth[t]! > 0) panel.lnDepth[t] = Math.log(1 - plannedDepth[t]!);
    }
    return panel;
  });
  return {
    line: input.line,
    weeks,
    pastWeeks,
    horizon: input.horizon,
    items,
    locations,
    mechanicNames,
    series,
    hasZeros,
    findings,
  };
}

/** The same panel with every coming promotion of the line switched off: shelf price, no feature, display or mechanic. */
export function switchOffComingPromotions(panel: LinePanel): LinePanel {
  const clear = (values: Float64Array): Float64Array => values.slice().fill(0, panel.pastWeeks);
  return {
    ...panel,
    series: panel.series.map((series) => ({
      ...series,
      lnDepth: clear(series.lnDepth).map((depth, t) => (t < panel.pastWeeks ? depth : Math.max(0, series.lnDepth[t]!))),
      feature: clear(series.feature),
      display: clear(series.display),
      mechanics: series.mechanics.map(clear),
      isPromoted: series.isPromoted.slice().fill(0, panel.pastWeeks),
    })),
  };
}

interface PromotionShares {
  feature: number;
  display: number;
  mechanics: Readonly<Record<string, number>>;
}

function setPromotion(panel: PanelSeries, t: number, week: PromotionShares, mechanicNames: readonly string[]): void {
  panel.feature[t] = toShare(week.feature);
  panel.display[t] = toShare(week.display);
  mechanicNames.forEach((name, m) => (panel.mechanics[m]![t] = toShare(week.mechanics[name])));
  const isPromoted = panel.feature[t] > 0 || panel.display[t] > 0 || panel.mechanics.some((values) => values[t]! > 0);
  if (isPromoted) panel.isPromoted[t] = 1;
}

function toShare(value: number | undefined): number {
  return value !== undefined && value > 0 ? Math.min(1, value) : 0;
}

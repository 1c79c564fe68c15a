import type { FitDiagnosis } from './diagnosis/diagnose-fit.ts';

/**
 * What the forecasting arithmetic takes and gives. No database, HTTP or clock in it.
 * Weeks are `weekStart` strings (`YYYY-MM-DD`, first day of the trading week). NaN stands for "unknown" in number arrays.
 */

/** One week of one series as sold. A week that is not listed here is unknown, not zero. */
export interface SoldWeek {
  weekStart: string;
  units: number;
  /** Price paid per unit, money; NaN where unknown. */
  price: number;
  /** Shelf price without promotion; NaN where unknown (then inferred, looking back only). */
  regularPrice: number;
  /** Shares of the week, 0…1; NaN where unknown. */
  feature: number;
  display: number;
  /** Further mechanics by name, shares 0…1. */
  mechanics: Readonly<Record<string, number>>;
  /** Share of the week in which the shelf was empty, 0…1. */
  gap: number;
  /** Days the store was open in this trading week, 0…7. */
  daysOpen: number;
}

/** What a plan holds of a coming week. Missing weeks have no promotion and the last regular price. */
export interface PlannedWeek {
  weekStart: string;
  /** Expected price paid; NaN where unknown: then regularPrice × (1 − depth). */
  price: number;
  regularPrice: number;
  /** Planned price cut as a share of the regular price, 0…1; NaN where unknown. */
  depth: number;
  feature: number;
  display: number;
  mechanics: Readonly<Record<string, number>>;
}

export interface SeriesInput {
  item: string;
  location: string;
  /** Smallest step in which the model's mean is planned, units (1 if whole units). */
  unitStep: number;
  sold: readonly SoldWeek[];
  planned: readonly PlannedWeek[];
  /** Weeks from … up to and including …, in which the item is listed; outside it the forecast is 0. null = open. */
  listedFrom: string | null;
  listedTo: string | null;
}

export interface HolidayWeek {
  name: string;
  /** First day of the trading week that holds the date, and the weekday offset (0…6) of the date within it. */
  weekStart: string;
  dayInWeek: number;
}

export interface LineInput {
  line: string;
  series: readonly SeriesInput[];
  /** All holidays and own events from the first sold week to the last planned one. */
  holidays: readonly HolidayWeek[];
  /** Last week that may be read. Sales after it must not influence anything. */
  origin: string;
  /** Number of weeks after the origin. */
  horizon: number;
  seed: number;
}

export type SeriesMethod = 'regression' | 'poisson' | 'intermittent' | 'simple-average' | 'not-listed';

/** Arrays of length `horizon`, from the week after the origin. Units, unrounded. */
export interface SeriesForecast {
  item: string;
  location: string;
  method: SeriesMethod;
  mean: Float64Array;
  /** Mean with every promotion of the line switched off. */
  base: Float64Array;
  p2_5: Float64Array;
  p10: Float64Array;
  p50: Float64Array;
  p90: Float64Array;
  p97_5: Float64Array;
  /** Per week: marks such as 'outside-seen-price', 'outside-seen-promotion', 'above-three-times-largest'. */
  marks: readonly (readonly string[])[];
  /**
   * Natural-log parts of the median per week by factor name (level, price, promotion, around, neighbours, season, holiday, trend, recent level);
   * of the mean where `method` is 'poisson' or plain. Those other than promotion, around and neighbours add up to ln of the base but for one
   * factor from median to mean, the same in all weeks.
   */
  parts: Readonly<Record<string, Float64Array>>;
}

/** Quantiles of a total over series (and weeks), from the joint paths. */
export interface TotalForecast {
  /** 'line', or 'item' / 'location' with its code in `of`. */
  scope: 'line' | 'item' | 'location';
  of: string | null;
  mean: Float64Array;
  p2_5: Float64Array;
  p10: Float64Array;
  p50: Float64Array;
  p90: Float64Array;
  p97_5: Float64Array;
}

/** Something the fit has to tell a person. `kind` is a key of the client's texts; values fill its gaps. */
export interface Finding {
  kind: string;
  item?: string;
  location?: string;
  values?: Readonly<Record<string, string | number>>;
}

export interface FittedCoefficient {
  name: string;
  /** Factor group of the name: price, promotion, around, neighbours, season, holiday, trend. */
  group: string;
  estimate: number;
  /** Clustered by week. */
  standardError: number;
  low95: number;
  high95: number;
}

export interface LineFit {
  specification: Readonly<Record<string, unknown>>;
  coefficients: readonly FittedCoefficient[];
  rows: number;
  rank: number;
  sigma: number;
  rSquared: number;
  aic: number;
  /** Upper triangle of R, row by row, in the order of `coefficients`. */
  factorR: readonly number[];
  /** Scores of the candidate specifications, best first. */
  scores: readonly { specification: string; crps: number; wape: number }[];
  findings: readonly Finding[];
  /** Only where it was asked for. */
  diagnosis?: FitDiagnosis;
  seconds: number;
}

export interface LineForecast {
  fit: LineFit | null;
  series: readonly SeriesForecast[];
  totals: readonly TotalForecast[];
  findings: readonly Finding[];
}

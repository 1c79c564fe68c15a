/** An item or a location of an effect: what it deviates from the line by, and the slope that it is forecast with. */
export interface EffectMember {
  name: string;
  /** Column of the design with its deviation from the line's slope; null where it has none of its own. */
  column: number | null;
  /** ln units per unit of the column; NaN where nothing of it was fitted. */
  slope: number;
}

/** One effect of a line: a slope shared by all series and, where earned, what items and locations deviate from it by. */
export interface FittedEffect {
  name: string;
  group: string;
  /** Column of the design with the line's slope; null where its sign couldn't be and it is taken as 0. */
  column: number | null;
  /** The line's slope, ln units per unit of the column. */
  estimate: number;
  items: readonly EffectMember[];
  locations: readonly EffectMember[];
}

/** One series of the rows. */
export interface FittedSeries {
  item: string;
  location: string;
}

/**
 * A fit as its diagnosis reads it. Rows are sorted by series and week; arrays have one value per row, `design` is rows × columns,
 * row-major, centred within the series by the weights.
 */
export interface FittedRows {
  design: Float64Array;
  columns: number;
  /** ln units (or the working response), not centred. */
  response: Float64Array;
  weights: Float64Array;
  residuals: Float64Array;
  /** w/Σw(series) + h(centred design), so that the absorbed intercepts count. */
  leverages: Float64Array;
  /** Index into `seriesOf`. */
  series: Int32Array;
  /** Whole weeks on one axis, and their first days. */
  weeks: Int32Array;
  weekStarts: readonly string[];
  seriesOf: readonly FittedSeries[];
  effects: readonly FittedEffect[];
  /** Ridge penalty per column of the design. */
  penalties: Float64Array;
  /** QR factor of the weighted and penalised design, rank × rank, row-major, in the order of `kept`. */
  rank: number;
  kept: readonly number[];
  factorR: Float64Array;
  /** A working response of a pseudo-likelihood has no likelihood. */
  isPseudoLikelihood: boolean;
}

import { quantileOfSorted } from './quantile.ts';

/** Bands of horizons that share a factor: first and last horizon of each. */
const BANDS: readonly (readonly [number, number])[] = [
  [1, 2],
  [3, 4],
  [5, 8],
  [9, 13],
  [14, Infinity],
];
/** A band on its own needs this many weeks: with fewer the rank's rounding alone widens an 80 % range by several points. */
const FEWEST_WEEKS = 30;
const HALF_LIFE_WEEKS = 26;
const SMALLEST_FACTOR = 0.5;
const LARGEST_FACTOR = 3;

/** One out-of-sample cell: its error in ln units ÷ the standard deviation that the paths give it. */
export interface StandardisedError {
  value: number;
  week: number;
  horizon: number;
  kind: 0 | 1;
}

/** Quantiles of the standardised path deviations: 2.5, 10, 90 and 97.5 %. */
export interface DeviationQuantiles {
  p2_5: number;
  p10: number;
  p90: number;
  p97_5: number;
}

/** Factors on path deviations: up to the 80 % range, and from the 95 % range on. */
export interface ScalingFactors {
  inner: number;
  outer: number;
}

/** Factors on path deviations by horizon and kind of week; null where there are too few weeks to know. */
export type PathScaling = (horizon: number, kind: 0 | 1) => ScalingFactors | null;

/**
 * Split conformal prediction (Papadopoulos et al. 2002; Lei et al. 2018): the factor that widens or narrows a range until the share
 * of out-of-sample errors inside it is right, as the error of rank ⌈(n + 1)(1 − α)⌉ among n, a week counting as one case.
 * Where a band holds few weeks or the rank reaches the last of them, so that a range would hang on one week, the band is joined with
 * its neighbours, then promoted with other weeks.
 */
export function scaleByConformal(
  errors: readonly StandardisedError[],
  quantiles: readonly [DeviationQuantiles, DeviationQuantiles],
): PathScaling {
  const known = new Map<string, ScalingFactors | null>();
  return (horizon, kind) => {
    const band = BANDS.findIndex(([first, last]) => horizon >= first && horizon <= last);
    const key = `${band}/${kind}`;
    let factors = known.get(key);
    if (factors === undefined) {
      factors = factorsOf(errors, quantiles, band, kind);
      known.set(key, factors);
    }
    return factors;
  };
}

function factorsOf(
  errors: readonly StandardisedError[],
  quantiles: readonly [DeviationQuantiles, DeviationQuantiles],
  band: number,
  kind: 0 | 1,
): ScalingFactors | null {
  const inner = widen(errors, band, kind, 0.2, ({ value, kind: of }) =>
    value >= 0 ? value / quantiles[of].p90 : value / quantiles[of].p10,
  );
  if (inner === null) return null;
  const outer = widen(errors, band, kind, 0.05, ({ value, kind: of }) =>
    value >= 0 ? value / quantiles[of].p97_5 : value / quantiles[of].p2_5,
  );
  return { inner: clamp(inner), outer: clamp(outer ?? inner) };
}

function clamp(factor: number): number {
  return Math.min(LARGEST_FACTOR, Math.max(SMALLEST_FACTOR, factor));
}

function widen(
  errors: readonly StandardisedError[],
  band: number,
  kind: 0 | 1,
  alpha: number,
  scoreOf: (error: StandardisedError) => number,
): number | null {
  let scores: { score: number; week: number }[] = [];
  for (const isKindKept of [true, false]) {
    for (let reach = 0; reach < BANDS.length; reach++) {
      const first = BANDS[Math.max(0, band - reach)]![0];
      const last = BANDS[Math.min(BANDS.length - 1, band + reach)]![1];
      const group = errors.filter(
        (error) => error.horizon >= first && error.horizon <= last && (!isKindKept || error.kind === kind),
      );
      scores = group.map((error) => ({ score: scoreOf(error), week: error.week }));
      const factor = countWeeks(scores) >= FEWEST_WEEKS ? conformalQuantile(scores, alpha) : null;
      if (factor !== null) return factor;
    }
  }
  return conformalQuantile(scores, alpha);
}

function countWeeks(cases: readonly { week: number }[]): number {
  return new Set(cases.map((one) => one.week)).size;
}

/**
 * Score of rank ⌈(n + 1)(1 − α)⌉ among n weeks, read off the pooled scores of all their cells; null where the rank reaches the last week.
 * Cells of one week share its shock, so they don't count as cases of their own in the rank. A week counts half for every half year that
 * it lies back (weighted conformal prediction, Barber et al. 2023), n being the effective number (Σw)² ÷ Σw²: with equal weights the orange-juice
 * chain's 80 % ranges, scaled by errors of a year ago, covered 86 %.
 */
export function conformalQuantile(cases: readonly { score: number; week: number }[], alpha: number): number | null {
  const latest = cases.reduce((most, { week }) => Math.max(most, week), -Infinity);
  const weightOf = (week: number): number => 0.5 ** ((latest - week) / HALF_LIFE_WEEKS);
  let sum = 0;
  let squares = 0;
  for (const week of new Set(cases.map((one) => one.week))) {
    sum += weightOf(week);
    squares += weightOf(week) ** 2;
  }
  const weeks = (sum * sum) / squares;
  const rank = (weeks + 1) * (1 - alpha);
  if (!(rank <= weeks - 1)) return null;
  const sorted = [...cases].sort((a, b) => a.score - b.score);
  const needed = (rank / weeks) * sorted.reduce((all, { week }) => all + weightOf(week), 0) * (1 - 1e-9);
  let weight = 0;
  for (const { score, week } of sorted) {
    weight += weightOf(week);
    if (weight >= needed) return score;
  }
  return null;
}

/** Quantiles of standardised deviations, kept off 0 so that an error can be measured against them. */
export function quantilesOfDeviations(values: Float64Array): DeviationQuantiles {
  const sorted = values.slice().sort();
  return {
    p2_5: Math.min(-0.2, quantileOfSorted(sorted, 0.025)),
    p10: Math.min(-0.1, quantileOfSorted(sorted, 0.1)),
    p90: Math.max(0.1, quantileOfSorted(sorted, 0.9)),
    p97_5: Math.max(0.2, quantileOfSorted(sorted, 0.975)),
  };
}

/** A standardised deviation stretched by the inner factor up to the 80 % range, by the outer from the 95 % range on, and in between. */
export function stretchDeviation(
  value: number,
  { inner, outer }: ScalingFactors,
  quantiles: DeviationQuantiles,
): number {
  const near = value >= 0 ? quantiles.p90 : quantiles.p10;
  const far = value >= 0 ? quantiles.p97_5 : quantiles.p2_5;
  const ratio = far === near ? 1 : (value - near) / (far - near);
  const share = Math.min(1, Math.max(0, ratio));
  const atLeast = Math.max(outer, (inner * near) / far);
  return value * (inner + share * (atLeast - inner));
}

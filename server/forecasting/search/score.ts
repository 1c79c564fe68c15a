/** Quantile levels at which the predictive distribution of a cell is held while candidates are compared. */
const LEVELS = 19;

export interface CandidateScore {
  /** Mean continuous ranked probability score, units. */
  crps: number;
  /** Σ|y − median| ÷ Σy. */
  wape: number;
  /** Summed CRPS per origin, units. */
  byOrigin: Float64Array;
}

/**
 * Continuous ranked probability score of a sample forecast: mean|x − y| − ½·mean|x − x′| (Gneiting & Raftery 2007, eq. 21).
 * sorted: ascending values of the sample.
 */
export function crpsOfSample(sorted: Float64Array, actual: number): number {
  const n = sorted.length;
  let distance = 0;
  let spread = 0;
  for (let i = 0; i < n; i++) {
    distance += Math.abs(sorted[i]! - actual);
    spread += (2 * i - n + 1) * sorted[i]!;
  }
  return distance / n - spread / (n * n);
}

/** Evenly spaced quantiles (levels (i + ½)/19) of standardised residuals, the shape of a candidate's predictive distribution. */
export function summariseShape(standardised: readonly number[]): Float64Array {
  const shape = new Float64Array(LEVELS);
  if (standardised.length === 0) return shape;
  const sorted = Float64Array.from(standardised).sort();
  for (let i = 0; i < LEVELS; i++) {
    shape[i] = sorted[Math.min(sorted.length - 1, Math.floor(((i + 0.5) / LEVELS) * sorted.length))]!;
  }
  return shape;
}

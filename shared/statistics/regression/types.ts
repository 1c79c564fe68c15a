/** Input and output of the least-squares kernel; see `least-squares.ts`. */
export interface LeastSquaresInput {
  /** n × p, row-major. */
  design: Float64Array;
  rows: number;
  columns: number;
  /** n values. */
  response: Float64Array;
  /** n non-negative weights; all 1 if missing. */
  weights?: Float64Array;
  /** p non-negative ridge penalties on the coefficients (λ in Σw·e² + Σλ·b²); they enter as extra rows. */
  penalties?: Float64Array;
  /** p names, for messages and for naming dropped columns. */
  names?: readonly string[];
}

export interface LeastSquaresFit {
  /** p coefficients in column order; NaN never: a column that depends on earlier ones is null. */
  coefficients: readonly (number | null)[];
  rank: number;
  /** Column indices kept, in order, and those dropped as aliased. */
  kept: readonly number[];
  dropped: readonly number[];
  /** rank × rank upper triangle of the QR factor on the original column scale, row-major, rows and columns as in `kept`. */
  factorR: Float64Array;
  fitted: Float64Array;
  residuals: Float64Array;
  /** Leverages of the n data rows (weights included). */
  hatDiagonal: Float64Array;
  /** Σ w·e². */
  residualSumOfSquares: number;
}

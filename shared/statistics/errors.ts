/** What a statistic refuses to compute; services translate these into problems a person can act on. */
export class StatisticsError extends Error {
  override name = 'StatisticsError';
}

/** There are not more rows (of positive weight) than coefficients, so nothing is left to judge the fit by. */
export class TooFewRowsError extends StatisticsError {
  override name = 'TooFewRowsError';
  readonly rows: number;
  readonly needed: number;

  constructor(rows: number, needed: number, what = 'rows') {
    super(`${rows} ${what} are too few: at least ${needed} are needed`);
    this.rows = rows;
    this.needed = needed;
  }
}

/** A number that has to be finite is NaN or infinite; `where` names it. */
export class NonFiniteInputError extends StatisticsError {
  override name = 'NonFiniteInputError';
  readonly where: string;

  constructor(where: string) {
    super(`${where} is not a finite number`);
    this.where = where;
  }
}

/** Lengths that belong together differ, or a parameter lies outside what the statistic is defined for. */
export class InvalidInputError extends StatisticsError {
  override name = 'InvalidInputError';
}

/** A matrix that has to be of full rank is not. */
export class SingularMatrixError extends StatisticsError {
  override name = 'SingularMatrixError';
}

/** An iteration did not settle within its limit. */
export class NoConvergenceError extends StatisticsError {
  override name = 'NoConvergenceError';
}

/** The answer has a zero denominator (no sales at all, a constant series). */
export class UndefinedStatisticError extends StatisticsError {
  override name = 'UndefinedStatisticError';
}

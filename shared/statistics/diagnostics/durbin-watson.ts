import { InvalidInputError, UndefinedStatisticError } from '../errors.ts';

/** Σ(eₜ − eₜ₋₁)² / Σe² of one series without gaps (Durbin & Watson 1950); 2 without autocorrelation. Checked against R's lmtest::dwtest. */
export function computeDurbinWatson(residuals: ArrayLike<number>): number {
  let squares = 0;
  let differences = 0;
  for (let i = 0; i < residuals.length; i++) {
    squares += residuals[i]! ** 2;
    if (i > 0) differences += (residuals[i]! - residuals[i - 1]!) ** 2;
  }
  if (squares === 0) throw new UndefinedStatisticError('without residuals there is no autocorrelation');
  return differences / squares;
}

/**
 * Durbin–Watson within series (Bhargava, Franzini & Narendranathan 1982), for rows sorted by series and period: differences never cross from one
 * series to the next. With `gaps: 'respect'` only periods that follow each other by 1 are differenced, and Σ(eₜ − eₜ₋₁)² is scaled up from the pairs
 * seen to the pairs there would be without gaps; with `'ignore'` neighbouring rows count as neighbours in time.
 */
export function computeDurbinWatsonBySeries(
  residuals: ArrayLike<number>,
  series: ArrayLike<number | string>,
  periods: ArrayLike<number>,
  gaps: 'respect' | 'ignore' = 'respect',
): number {
  const rows = residuals.length;
  if (series.length !== rows || periods.length !== rows) {
    throw new InvalidInputError('as many series and periods as residuals');
  }
  let squares = 0;
  let differences = 0;
  let neighbours = 0;
  let pairs = 0;
  for (let i = 0; i < rows; i++) {
    squares += residuals[i]! ** 2;
    if (i === 0 || series[i] !== series[i - 1]) continue;
    const step = periods[i]! - periods[i - 1]!;
    if (!(step > 0)) throw new InvalidInputError(`row ${i + 1} is not later than the row before it in its series`);
    neighbours++;
    if (gaps === 'respect' && step !== 1) continue;
    pairs++;
    differences += (residuals[i]! - residuals[i - 1]!) ** 2;
  }
  if (squares === 0) throw new UndefinedStatisticError('without residuals there is no autocorrelation');
  if (pairs === 0) throw new UndefinedStatisticError('no two rows follow each other by one period');
  return (differences * (neighbours / pairs)) / squares;
}

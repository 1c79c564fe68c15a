import { InvalidInputError, UndefinedStatisticError } from '../errors.ts';
import { checkPairs } from './pairs.ts';

/**
 * Tracking signal Σ(f − y) ÷ mean |f − y| after each period, over the last `window` periods (all so far if missing); positive when forecasts run too
 * high. Null while no error has happened. The customary limit is ±4.
 */
export function computeTrackingSignals(
  actual: ArrayLike<number>,
  forecast: ArrayLike<number>,
  window = Infinity,
): (number | null)[] {
  if (!(window >= 1)) throw new InvalidInputError('a window holds at least one period');
  const count = checkPairs({ actual, forecast });
  return Array.from({ length: count }, (_, end) => {
    const start = Math.max(0, end + 1 - window);
    let sum = 0;
    let absolute = 0;
    for (let i = start; i <= end; i++) {
      sum += forecast[i]! - actual[i]!;
      absolute += Math.abs(forecast[i]! - actual[i]!);
    }
    return absolute > 0 ? (sum * (end + 1 - start)) / absolute : null;
  });
}

/** The last of the running signals. Throws UndefinedStatisticError if there was no error at all. */
export function computeTrackingSignal(
  actual: ArrayLike<number>,
  forecast: ArrayLike<number>,
  window = Infinity,
): number {
  const last = computeTrackingSignals(actual, forecast, window).at(-1);
  if (last === null || last === undefined) throw new UndefinedStatisticError('no error has happened yet');
  return last;
}

import { InvalidInputError, UndefinedStatisticError } from '../errors.ts';
import { checkPairs } from './pairs.ts';

function computeNaiveError(training: ArrayLike<number>, season: number, power: 1 | 2): number {
  if (!Number.isInteger(season) || season < 1) throw new InvalidInputError('a season is a whole number from 1 on');
  checkPairs({ training });
  if (training.length <= season) throw new InvalidInputError('the training series is no longer than its season');
  let sum = 0;
  for (let i = season; i < training.length; i++) sum += Math.abs(training[i]! - training[i - season]!) ** power;
  if (sum === 0) throw new UndefinedStatisticError('a training series that never moves gives no scale');
  return sum / (training.length - season);
}

/**
 * MASE: mean |y − f| ÷ mean |yₜ − yₜ₋ₘ| of the training series, m = `season`, 1 if missing (Hyndman & Koehler 2006).
 * Throws UndefinedStatisticError if the training series never moves.
 */
export function computeMase(
  training: ArrayLike<number>,
  actual: ArrayLike<number>,
  forecast: ArrayLike<number>,
  season = 1,
): number {
  const count = checkPairs({ actual, forecast });
  let sum = 0;
  for (let i = 0; i < count; i++) sum += Math.abs(actual[i]! - forecast[i]!);
  return sum / count / computeNaiveError(training, season, 1);
}

/**
 * RMSSE: √(mean (y − f)² ÷ mean (yₜ − yₜ₋ₘ)² of the training series), m = `season`, 1 if missing (M5 competitors' guide 2020).
 * Throws UndefinedStatisticError if the training series never moves.
 */
export function computeRmsse(
  training: ArrayLike<number>,
  actual: ArrayLike<number>,
  forecast: ArrayLike<number>,
  season = 1,
): number {
  const count = checkPairs({ actual, forecast });
  let sum = 0;
  for (let i = 0; i < count; i++) sum += (actual[i]! - forecast[i]!) ** 2;
  return Math.sqrt(sum / count / computeNaiveError(training, season, 2));
}

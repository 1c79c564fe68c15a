import type { SoldWeek } from './types.ts';
import { addWeeks } from '../../shared/domain/weeks.ts';

export interface BenchmarkForecasts {
  naive: Float64Array;
  seasonalNaive: Float64Array;
  eightWeekMean: Float64Array;
}

/**
 * The forecasts anybody could make, from the weeks sold up to the origin (in week order): the last week's units, the units of 52 weeks
 * before (else the last), and the mean of the last eight.
 */
export function forecastBenchmarks(sold: readonly SoldWeek[], origin: string, horizon: number): BenchmarkForecasts {
  const past = sold.filter((week) => week.weekStart <= origin && week.units >= 0);
  const last = past.at(-1)?.units ?? 0;
  const recent = past.slice(-8);
  const mean = recent.length > 0 ? recent.reduce((sum, week) => sum + week.units, 0) / recent.length : 0;
  const byWeek = new Map(past.map((week) => [week.weekStart, week.units]));
  const seasonalNaive = Float64Array.from(
    { length: horizon },
    (_, h) => byWeek.get(addWeeks(origin, h + 1 - 52)) ?? last,
  );
  return {
    naive: new Float64Array(horizon).fill(last),
    seasonalNaive,
    eightWeekMean: new Float64Array(horizon).fill(mean),
  };
}

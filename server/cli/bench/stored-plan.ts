import { gatherForecast, saveForecast } from '../../features/plan/forecast.service.ts';
import type { LineForecast, LineInput } from '../../forecasting/types.ts';
import { inSnapshot, inTransaction } from '../../lib/database.ts';
import { storeCategory, type BenchDatabase } from './bench-database.ts';
import { inventCategory } from './invented-range.ts';

/** A forecast that follows from the place of its figures: what is read and shown doesn't depend on how good it is. */
function inventForecast(input: LineInput): LineForecast {
  const along = (factor: number, series: number) =>
    Float64Array.from({ length: input.horizon }, (_, week) => factor * (20 + ((series * 7 + week * 3) % 90)) + 0.137);
  const quantiles = (series: number) => ({
    mean: along(1, series),
    p2_5: along(0.5, series),
    p10: along(0.7, series),
    p50: along(0.98, series),
    p90: along(1.4, series),
    p97_5: along(1.9, series),
  });
  return {
    fit: null,
    series: input.series.map(({ item, location }, index) => ({
      item,
      location,
      method: 'simple-average',
      ...quantiles(index),
      base: along(0.9, index),
      marks: Array.from({ length: input.horizon }, () => []),
      parts: {},
    })),
    totals: [{ scope: 'line', of: null, ...quantiles(0) }],
    findings: [],
  };
}

/** Lines of `items` series with a stored plan of `weeks` weeks; returns each line's id and its first item's. */
export async function storePlan(
  given: BenchDatabase,
  size: { lines: number; items: number; weeks: number },
): Promise<{ lineId: number; itemId: number }[]> {
  const { database, actor } = given;
  const categoryId = await storeCategory(given, inventCategory('Wide', size.lines, size.items));
  const gathered = await inSnapshot(database, (tx) => gatherForecast(tx, categoryId, size.weeks));
  const forecasts = gathered.lines.map(({ input }) => inventForecast(input));
  await inTransaction(database, (tx) => saveForecast(tx, actor, gathered, forecasts, null));
  return gathered.lines.map(({ lineId, history }) => ({ lineId, itemId: history[0]!.itemId }));
}

import type { PlannedWeek, SoldWeek } from '../../forecasting/types.ts';
import { inferRegularPrice } from '../../forecasting/features/regular-price.ts';

/**
 * Expected price paid by week of the plan, money per unit: the planned price where there is one, else the planned or last regular price less the
 * planned depth. null where no price was ever known. A regular price that wasn't given is inferred from what was paid, looking back only.
 */
export function expectPrices(
  sold: readonly SoldWeek[],
  planned: readonly PlannedWeek[],
  weekStarts: readonly string[],
): (number | null)[] {
  const { regular } = inferRegularPrice(
    Float64Array.from(sold, ({ price }) => price),
    Float64Array.from(sold, ({ regularPrice }) => regularPrice),
    sold.map(({ feature, display, mechanics }) =>
      feature > 0 || display > 0 || Object.values(mechanics).some((share) => share > 0) ? 1 : 0,
    ),
  );
  const last = regular.findLast((price) => price > 0) ?? Number.NaN;
  const byWeek = new Map(planned.map((week) => [week.weekStart, week]));
  return weekStarts.map((weekStart) => {
    const week = byWeek.get(weekStart);
    if (week !== undefined && week.price >= 0) return week.price;
    const shelf = week !== undefined && week.regularPrice > 0 ? week.regularPrice : last;
    const price = shelf * (1 - (week !== undefined && week.depth > 0 ? week.depth : 0));
    return Number.isFinite(price) ? Math.round(price * 10_000) / 10_000 : null;
  });
}

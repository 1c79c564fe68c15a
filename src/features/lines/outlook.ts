import type { LinePlan } from '../../../shared/contracts/plan.ts';
import { addWeeks } from '../../../shared/domain/weeks.ts';
import type { OutlookWeek } from '../../components/OutlookChart.tsx';

/** Line totals by week: sold up to the seam, then model, plan and the model's ranges. Weeks of which nothing is known have neither. */
export function describeOutlook({
  series,
  totals,
  historyFirstWeek,
  planFirstWeek,
  planWeeks,
}: Pick<LinePlan, 'series' | 'totals' | 'historyFirstWeek' | 'planFirstWeek' | 'planWeeks'>): OutlookWeek[] {
  if (historyFirstWeek === null || planFirstWeek === null) return [];
  const historyWeeks = series[0]?.units.length ?? 0;
  const sold = Array.from({ length: historyWeeks }, (_, week): OutlookWeek => {
    const known = series.flatMap(({ units }) => units[week] ?? []);
    return {
      weekStart: addWeeks(historyFirstWeek, week),
      sold: known.length === 0 ? null : known.reduce((sum, units) => sum + units, 0),
      planned: null,
    };
  });
  const range = totals.find(({ scope }) => scope.itemId === null && scope.locationId === null);
  const sumOf = (pick: (one: LinePlan['series'][number]) => number[], week: number): number =>
    series.reduce((sum, one) => sum + (pick(one)[week] ?? 0), 0);
  const coming = Array.from({ length: planWeeks }, (_, week): OutlookWeek => {
    const model = sumOf((one) => one.model, week);
    return {
      weekStart: addWeeks(planFirstWeek, week),
      sold: null,
      planned: {
        model,
        plan: sumOf((one) => one.plan, week),
        low95: range?.p2_5[week] ?? model,
        low80: range?.p10[week] ?? model,
        high80: range?.p90[week] ?? model,
        high95: range?.p97_5[week] ?? model,
      },
    };
  });
  return [...sold, ...coming];
}

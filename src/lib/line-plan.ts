import { queryOptions } from '@tanstack/react-query';
import { LinePlan } from '../../shared/contracts/plan.ts';
import { request } from './api.ts';

/** A line's plan with so many weeks of history. Read by the grid and by the chart of the line page. */
export const linePlanQuery = (lineId: number, historyWeeks: number) =>
  queryOptions({
    queryKey: ['plan', 'line', lineId, 'plan', historyWeeks],
    queryFn: ({ signal }) => request(LinePlan, `/plan/lines/${lineId}`, { query: { historyWeeks }, signal }),
  });

import { queryOptions } from '@tanstack/react-query';
import { CategoryPlan } from '../../shared/contracts/plan.ts';
import { request } from './api.ts';

/** Plan of a category line by line, with its weekline. Read by every place that shows the weekline. */
export const categoryPlanQuery = (categoryId: number) =>
  queryOptions({
    queryKey: ['plan', 'category', categoryId],
    queryFn: ({ signal }) => request(CategoryPlan, `/plan/categories/${categoryId}`, { signal }),
  });

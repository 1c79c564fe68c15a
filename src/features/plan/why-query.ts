import { keepPreviousData, queryOptions } from '@tanstack/react-query';
import { WhyNumber, type OverrideScope } from '../../../shared/contracts/plan.ts';
import { request } from '../../lib/api.ts';

/** Why one number of a line's newest version is what it is. A saved version never changes; a new one asks anew while the old answer stays on screen. */
export const whyQuery = (lineId: number, version: number, { itemId, locationId }: OverrideScope, week: string) =>
  queryOptions({
    queryKey: ['plan', 'line', lineId, 'why', version, itemId, locationId, week],
    queryFn: ({ signal }) =>
      request(WhyNumber, `/plan/lines/${lineId}/why`, {
        query: { itemId, locationId, week },
        signal,
      }),
    staleTime: 5 * 60_000,
    placeholderData: keepPreviousData,
  });

import { queryOptions } from '@tanstack/react-query';
import { WaitingList } from '../../../shared/contracts/waiting.ts';
import { request } from '../../lib/api.ts';

export const waitingQuery = queryOptions({
  queryKey: ['waiting'],
  queryFn: ({ signal }) => request(WaitingList, '/waiting', { signal }),
  staleTime: 15_000,
  refetchInterval: 60_000,
});

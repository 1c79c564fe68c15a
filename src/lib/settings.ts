import { queryOptions, useQuery } from '@tanstack/react-query';
import { Settings } from '../../shared/contracts/settings.ts';
import { request } from './api.ts';

export const settingsQuery = queryOptions({
  queryKey: ['settings'],
  queryFn: ({ signal }) => request(Settings, '/settings', { signal }),
  staleTime: 5 * 60_000,
});

/** Currency of money on screen; null until it is known. */
export function useCurrency(): string | null {
  return useQuery(settingsQuery).data?.currency ?? null;
}

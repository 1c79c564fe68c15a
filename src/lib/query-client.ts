import { QueryClient } from '@tanstack/react-query';
import { ProblemError } from './api.ts';

/** Answers stay fresh for 30 s; only an unreachable server or a failing one is asked again, a refusal never. */
export function createQueryClient(): QueryClient {
  return new QueryClient({
    defaultOptions: {
      queries: {
        staleTime: 30_000,
        refetchOnWindowFocus: true,
        retry: (failures, error) =>
          failures < 2 && error instanceof ProblemError && (error.status === 0 || error.status >= 500),
      },
      mutations: { retry: false },
    },
  });
}

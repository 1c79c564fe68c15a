import { queryOptions, useSuspenseQuery } from '@tanstack/react-query';
import { useCallback } from 'react';
import { Session } from '../../shared/contracts/accounts.ts';
import { mayDo, type Right, type Role } from '../../shared/domain/roles.ts';
import { request, requestNothing } from './api.ts';

export const sessionQuery = queryOptions({
  queryKey: ['session'],
  queryFn: ({ signal }) => request(Session, '/session', { signal }),
  staleTime: 5 * 60_000,
});

/** The person signed in. Only below the shell, which waits for it. */
export function useSession(): Session {
  return useSuspenseQuery(sessionQuery).data;
}

/** Whether the person signed in holds a right for a category (null = anywhere). Hides only; the server decides. */
export function useMay(): (right: Right, categoryId: number | null) => boolean {
  const { assignments } = useSession().person;
  return useCallback((right, categoryId) => mayDo(assignments, right, categoryId), [assignments]);
}

/** The person's role in a category: the one that may do most there. */
export function roleIn(
  assignments: readonly { role: Role; categoryId: number | null }[],
  categoryId: number | null,
): Role | null {
  const order: Role[] = ['category-lead', 'planner', 'finance', 'administrator', 'viewer'];
  const held = new Set(
    assignments
      .filter(
        (assignment) => assignment.categoryId === null || categoryId === null || assignment.categoryId === categoryId,
      )
      .map(({ role }) => role),
  );
  return order.find((role) => held.has(role)) ?? null;
}

/** Ends the session; the caller leads to the door. */
export function signOut(): Promise<void> {
  return requestNothing('/session', { method: 'DELETE' });
}

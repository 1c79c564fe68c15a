import { queryOptions, useMutation, useQueryClient, type QueryClient } from '@tanstack/react-query';
import { z } from 'zod';
import { Job } from '../../../shared/contracts/jobs.ts';
import {
  CellConflict,
  LinePlan,
  Round,
  SavedOverrides,
  VersionList,
  VersionState,
  type ChangeRound,
  type LockLine,
  type ReturnLine,
  type SaveOverrides,
  type SubmitLine,
  type UnlockLine,
} from '../../../shared/contracts/plan.ts';
import { ReasonList } from '../../../shared/contracts/settings.ts';
import { ProblemError, request } from '../../lib/api.ts';

const pollMs = 10_000;

/** The line's versions; asked again and again while a page is open, so that others' saves show without a reload. */
export const versionsQuery = (lineId: number) =>
  queryOptions({
    queryKey: ['plan', 'line', lineId, 'versions'],
    queryFn: ({ signal }) => request(VersionList, `/plan/lines/${lineId}/versions`, { signal }),
    staleTime: 0,
    refetchInterval: pollMs,
  });

/** One version of a line. It never changes. */
export const versionStateQuery = (lineId: number, number: number) =>
  queryOptions({
    queryKey: ['plan', 'line', lineId, 'version', number],
    queryFn: ({ signal }) => request(VersionState, `/plan/lines/${lineId}/versions/${number}`, { signal }),
    staleTime: Infinity,
  });

export const reasonsQuery = queryOptions({
  queryKey: ['reasons'],
  queryFn: ({ signal }) => request(ReasonList, '/reasons', { signal }),
  staleTime: 5 * 60_000,
});

function refreshLine(client: QueryClient, lineId: number): Promise<void> {
  return client.invalidateQueries({ queryKey: ['plan', 'line', lineId, 'plan'] });
}

function refreshAround(client: QueryClient, lineId: number): void {
  void client.invalidateQueries({ queryKey: ['plan', 'line', lineId, 'versions'] });
  void client.invalidateQueries({ queryKey: ['plan', 'category'] });
  void client.invalidateQueries({ queryKey: ['waiting'] });
}

/** A line's plan with what a save answered written into it. */
export function applySaved(plan: LinePlan, saved: SavedOverrides): LinePlan {
  const changed = new Map(saved.changed.map((series) => [`${series.itemId}:${series.locationId}`, series.plan]));
  return {
    ...plan,
    version: saved.version,
    overrides: saved.overrides,
    series: plan.series.map((series) => {
      const values = changed.get(`${series.itemId}:${series.locationId}`);
      return values ? { ...series, plan: values } : series;
    }),
  };
}

/** Saves all pending edits as one version. The answer goes into the cache; only where others saved in between is the line read anew. */
export function useSaveOverrides(lineId: number) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (save: SaveOverrides) =>
      request(SavedOverrides, `/plan/lines/${lineId}/overrides`, { method: 'PATCH', body: save }),
    onSuccess: async (saved, save) => {
      client.setQueriesData<LinePlan>({ queryKey: ['plan', 'line', lineId, 'plan'] }, (plan) =>
        plan ? applySaved(plan, saved) : plan,
      );
      refreshAround(client, lineId);
      if (saved.version.parent !== save.baseVersion) await refreshLine(client, lineId);
    },
  });
}

/** Both values of every cell that somebody else changed first, where that is why a save was refused; else null. */
export function readConflicts(error: unknown): CellConflict[] | null {
  if (!(error instanceof ProblemError) || error.type !== 'stale-cells') return null;
  const conflicts = z.array(CellConflict).min(1).safeParse(error.conflicts);
  return conflicts.success ? conflicts.data : null;
}

export type HandOverStep =
  | { step: 'submit'; body: z.infer<typeof SubmitLine> }
  | { step: 'return'; body: z.infer<typeof ReturnLine> }
  | { step: 'lock'; body: z.infer<typeof LockLine> }
  | { step: 'unlock'; body: z.infer<typeof UnlockLine> };

/** Submits, returns, locks or unlocks a line. The line in its new state comes back and is shown; history of other lengths is read anew. */
export function useHandOver(lineId: number) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: ({ step, body }: HandOverStep) =>
      request(LinePlan, `/plan/lines/${lineId}/${step}`, { method: 'POST', body }),
    onSuccess: async () => {
      refreshAround(client, lineId);
      await refreshLine(client, lineId);
    },
  });
}

export function useStartForecast(categoryId: number) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (horizonWeeks: number) =>
      request(Job, `/plan/categories/${categoryId}/forecast`, { method: 'POST', body: { horizonWeeks } }),
    onSuccess: () => client.invalidateQueries({ queryKey: ['plan', 'category', categoryId] }),
  });
}

/** Everything of the plan anew, e.g. after a forecast has ended. */
export function useRefreshPlans(): () => void {
  const client = useQueryClient();
  return () => {
    void client.invalidateQueries({ queryKey: ['plan'] });
    void client.invalidateQueries({ queryKey: ['waiting'] });
  };
}

/** Reads a line anew, e.g. when the poll has seen a newer version. */
export function useRefreshLine(lineId: number): () => Promise<void> {
  const client = useQueryClient();
  return () => refreshLine(client, lineId);
}

export function useChangeRound(categoryId: number) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (change: z.infer<typeof ChangeRound>) =>
      request(Round, `/plan/categories/${categoryId}/round`, { method: 'PUT', body: change }),
    onSuccess: () => client.invalidateQueries({ queryKey: ['plan'] }),
  });
}

import { queryOptions, useMutation, useQueryClient } from '@tanstack/react-query';
import { Job } from '../../../shared/contracts/jobs.ts';
import type { z } from 'zod';
import { type AcceptImport, ImportDetail, ImportList, type ImportMapping } from '../../../shared/contracts/sales.ts';
import { request, requestNothing } from '../../lib/api.ts';

export const importsQuery = (categoryId: number | null) =>
  queryOptions({
    queryKey: ['imports', categoryId],
    queryFn: ({ signal }) => request(ImportList, '/imports', { signal, query: { categoryId } }),
    refetchInterval: (query) => (query.state.data?.imports.some(({ state }) => /ing$/.test(state)) ? 2000 : false),
  });

export const importQuery = (importId: number) =>
  queryOptions({
    queryKey: ['import', importId],
    queryFn: ({ signal }) => request(ImportDetail, `/imports/${importId}`, { signal }),
    // Between two states there is work in the background.
    refetchInterval: (query) => (query.state.data && /ing$/.test(query.state.data.state) ? 1000 : false),
  });

export function useSendFile() {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (file: File) => {
      const form = new FormData();
      form.set('file', file);
      return request(ImportDetail, '/imports', { method: 'POST', body: form });
    },
    onSuccess: (detail) => {
      client.setQueryData(importQuery(detail.id).queryKey, detail);
      void client.invalidateQueries({ queryKey: ['imports'] });
    },
  });
}

export function useChangeMapping(importId: number) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (mapping: ImportMapping) =>
      request(ImportDetail, `/imports/${importId}/mapping`, { method: 'PUT', body: mapping }),
    onSuccess: (detail) => client.setQueryData(importQuery(importId).queryKey, detail),
  });
}

/** Accept, withdraw: each answers the job that does it; the import itself is asked for again. */
function useImportStep<Input>(importId: number, send: (input: Input) => Promise<unknown>) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: send,
    onSettled: () =>
      Promise.all([
        client.invalidateQueries({ queryKey: ['import', importId] }),
        client.invalidateQueries({ queryKey: ['imports'] }),
        client.invalidateQueries({ queryKey: ['waiting'] }),
      ]),
  });
}

export const useAcceptImport = (importId: number) =>
  useImportStep(importId, (body: z.infer<typeof AcceptImport>) =>
    request(Job, `/imports/${importId}/accept`, { method: 'POST', body }),
  );

export const useWithdrawImport = (importId: number) =>
  useImportStep(importId, (reason: string) =>
    request(Job, `/imports/${importId}/withdraw`, { method: 'POST', body: { reason } }),
  );

export const useDropImport = (importId: number) =>
  useImportStep(importId, () => requestNothing(`/imports/${importId}`, { method: 'DELETE' }));

/** What an accepted or withdrawn import may have changed everywhere. */
export function useRefreshAfterImport(): () => void {
  const client = useQueryClient();
  return () => {
    for (const key of ['import', 'imports', 'categories', 'plan', 'calendar', 'waiting']) {
      void client.invalidateQueries({ queryKey: [key] });
    }
  };
}

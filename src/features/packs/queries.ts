import { queryOptions, useMutation, useQueryClient } from '@tanstack/react-query';
import { Job } from '../../../shared/contracts/jobs.ts';
import { type BuildPack, PackList } from '../../../shared/contracts/packs.ts';
import { request } from '../../lib/api.ts';

export const packsQuery = (categoryId: number) =>
  queryOptions({
    queryKey: ['packs', categoryId],
    queryFn: ({ signal }) => request(PackList, '/packs', { signal, query: { categoryId } }),
  });

export function useBuildPack() {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (body: BuildPack) => request(Job, '/packs', { method: 'POST', body }),
    onSettled: (_job, _error, { categoryId }) => client.invalidateQueries({ queryKey: ['packs', categoryId] }),
  });
}

export function useRefreshPacks(categoryId: number): () => void {
  const client = useQueryClient();
  return () => {
    void client.invalidateQueries({ queryKey: ['packs', categoryId] });
    void client.invalidateQueries({ queryKey: ['waiting'] });
  };
}

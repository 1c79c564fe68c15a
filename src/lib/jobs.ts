import { queryOptions, useQuery } from '@tanstack/react-query';
import { useEffect, useRef } from 'react';
import { Job } from '../../shared/contracts/jobs.ts';
import { request } from './api.ts';

export const isJobOver = (job: Job) => job.state === 'done' || job.state === 'failed';

export const jobQuery = (jobId: number) =>
  queryOptions({
    queryKey: ['job', jobId],
    queryFn: ({ signal }) => request(Job, `/jobs/${jobId}`, { signal }),
    staleTime: 0,
    refetchInterval: (query) => (query.state.data && isJobOver(query.state.data) ? false : 700),
  });

/** Follows background work until it ends; `onEnd` is called once with its last state. */
export function useJob(jobId: number | null, onEnd?: (job: Job) => void): Job | null {
  const { data } = useQuery({ ...jobQuery(jobId ?? 0), enabled: jobId !== null });
  const latest = useRef(onEnd);
  useEffect(() => {
    latest.current = onEnd;
  });
  const reported = useRef<number | null>(null);
  const job = jobId === null ? null : (data ?? null);
  useEffect(() => {
    if (job && isJobOver(job) && reported.current !== job.id) {
      reported.current = job.id;
      latest.current?.(job);
    }
  }, [job]);
  return job;
}

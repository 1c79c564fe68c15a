import type { Express } from 'express';
import request from 'supertest';
import { expect } from 'vitest';
import { Job } from '../../shared/contracts/jobs.ts';
import { ImportDetail } from '../../shared/contracts/sales.ts';
import { acceptImportJob, readImportJob, withdrawImportJob } from '../../server/features/sales/sales.jobs.ts';
import type { Deps } from '../../server/lib/deps.ts';
import { runQueuedJobs } from './jobs.ts';

export const importHandlers = {
  'import.read': readImportJob,
  'import.accept': acceptImportJob,
  'import.withdraw': withdrawImportJob,
} as const;

/** A person at the import page: sends over HTTP, and waits for the queued work by doing it. */
export function buildImporter(app: Express, deps: Deps, cookie: string) {
  const read = async (id: number): Promise<ImportDetail> => {
    const response = await request(app).get(`/api/imports/${id}`).set('cookie', cookie);
    expect(response.status, response.text).toBe(200);
    return ImportDetail.parse(response.body);
  };
  const act = async (id: number, action: 'accept' | 'withdraw', body: object): Promise<Job> => {
    const response = await request(app).post(`/api/imports/${id}/${action}`).set('cookie', cookie).send(body);
    expect(response.status, response.text).toBe(202);
    await runQueuedJobs(deps, importHandlers);
    const { rows } = await deps.database.pool.query<{ state: Job['state']; problem: Job['problem'] }>(
      'select state, problem from job where id = $1',
      [Job.parse(response.body).id],
    );
    return { ...Job.parse(response.body), ...rows[0] };
  };
  return {
    read,
    /** Uploads and reads; content as text or as it lies on disk. */
    upload: async (fileName: string, content: string | Buffer): Promise<ImportDetail> => {
      const response = await request(app)
        .post('/api/imports')
        .set('cookie', cookie)
        .attach('file', Buffer.from(content), fileName);
      expect(response.status, response.text).toBe(201);
      const { id } = ImportDetail.parse(response.body);
      await runQueuedJobs(deps, importHandlers);
      return read(id);
    },
    accept: (id: number, { createUnknown = true }: { createUnknown?: boolean } = {}) =>
      act(id, 'accept', { createUnknown }),
    withdraw: (id: number, reason = 'sent by mistake') => act(id, 'withdraw', { reason }),
    changeMapping: async (id: number, mapping: ImportDetail['mapping']): Promise<ImportDetail> => {
      const response = await request(app)
        .put(`/api/imports/${id}/mapping`)
        .set('cookie', cookie)
        .send(mapping ?? {});
      expect(response.status, response.text).toBe(200);
      await runQueuedJobs(deps, importHandlers);
      return read(id);
    },
  };
}

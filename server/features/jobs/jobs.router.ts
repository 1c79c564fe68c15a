import { Router } from 'express';
import { IdText } from '../../../shared/contracts/primitives.ts';
import { actorOf } from '../../lib/http.ts';
import type { Deps } from '../../lib/deps.ts';
import { parseRequest } from '../../lib/problem.ts';
import { readJob } from './jobs.service.ts';

export function jobsRouter({ database }: Deps): Router {
  const router = Router();
  router.get('/jobs/:id', async (request, response) => {
    response.json(await readJob(database, actorOf(request), parseRequest(IdText, request.params.id)));
  });
  return router;
}

import { Router } from 'express';
import type { Deps } from '../../lib/deps.ts';
import { actorOf } from '../../lib/http.ts';
import { listWaiting } from './waiting.service.ts';

export function waitingRouter({ database }: Deps): Router {
  const router = Router();
  router.get('/waiting', async (request, response) => {
    response.json(await listWaiting(database, actorOf(request)));
  });
  return router;
}

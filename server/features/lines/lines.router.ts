import { Router } from 'express';
import { CreateCategory, CreateLine } from '../../../shared/contracts/lines.ts';
import { IdText } from '../../../shared/contracts/primitives.ts';
import type { Deps } from '../../lib/deps.ts';
import { actorOf } from '../../lib/http.ts';
import { parseRequest } from '../../lib/problem.ts';
import { createCategory, createLine, listCategories, readLineFit } from './lines.service.ts';

export function linesRouter({ database }: Deps): Router {
  const router = Router();
  router.get('/categories', async (request, response) => {
    response.json(await listCategories(database, actorOf(request)));
  });
  router.post('/categories', async (request, response) => {
    const { name } = parseRequest(CreateCategory, request.body);
    response.status(201).json(await createCategory(database, actorOf(request), name));
  });
  router.post('/lines', async (request, response) => {
    response.status(201).json(await createLine(database, actorOf(request), parseRequest(CreateLine, request.body)));
  });
  router.get('/lines/:id/fit', async (request, response) => {
    response.json(await readLineFit(database, actorOf(request), parseRequest(IdText, request.params.id)));
  });
  return router;
}

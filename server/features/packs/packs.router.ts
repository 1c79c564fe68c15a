import { pipeline } from 'node:stream/promises';
import { Router } from 'express';
import { BuildPack } from '../../../shared/contracts/packs.ts';
import { IdText } from '../../../shared/contracts/primitives.ts';
import type { Deps } from '../../lib/deps.ts';
import { actorOf } from '../../lib/http.ts';
import { parseRequest } from '../../lib/problem.ts';
import { listPacks, openPackFile, startPack } from './packs.service.ts';

export function packsRouter({ database }: Deps): Router {
  const router = Router();
  router.get('/packs', async (request, response) => {
    response.json(await listPacks(database, actorOf(request), parseRequest(IdText, request.query.categoryId)));
  });
  router.post('/packs', async (request, response) => {
    response.status(202).json(await startPack(database, actorOf(request), parseRequest(BuildPack, request.body)));
  });
  router.get('/packs/:id/file', async (request, response) => {
    const id = parseRequest(IdText, request.params.id);
    await openPackFile(database, actorOf(request), id, async (file, bytes) => {
      response.attachment(file.fileName);
      response.type('application/vnd.openxmlformats-officedocument.spreadsheetml.sheet');
      response.set({ 'content-length': String(file.sizeBytes), 'x-checksum-sha256': file.sha256 });
      await pipeline(bytes, response);
    });
  });
  return router;
}

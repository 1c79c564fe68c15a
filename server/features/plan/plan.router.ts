import { Router } from 'express';
import { z } from 'zod';
import {
  ChangeRound,
  LockLine,
  ReturnLine,
  SaveOverrides,
  StartForecast,
  SubmitLine,
  UnlockLine,
  WhyQuery,
} from '../../../shared/contracts/plan.ts';
import { IdText } from '../../../shared/contracts/primitives.ts';
import type { Deps } from '../../lib/deps.ts';
import { actorOf } from '../../lib/http.ts';
import { parseRequest } from '../../lib/problem.ts';
import { startForecast } from './forecast.service.ts';
import { changeRound, lockLine, returnLine, submitLine, unlockLine } from './hand-over.service.ts';
import { saveOverrides } from './overrides.service.ts';
import { defaultHistoryWeeks, readCategoryPlan, readLinePlan } from './plan.service.ts';
import { listVersions, readVersion } from './versions.service.ts';
import { readWhy } from './why.service.ts';

const LinePath = z.object({ lineId: IdText });
const VersionPath = z.object({ lineId: IdText, number: IdText });
const CategoryPath = z.object({ categoryId: IdText });
const LineQuery = z.object({ historyWeeks: z.coerce.number().int().min(0).max(520).default(defaultHistoryWeeks) });

export function planRouter({ database }: Deps): Router {
  const router = Router();

  router.get('/plan/categories/:categoryId', async (request, response) => {
    const { categoryId } = parseRequest(CategoryPath, request.params);
    response.json(await readCategoryPlan(database, actorOf(request), categoryId));
  });
  router.post('/plan/categories/:categoryId/forecast', async (request, response) => {
    const actor = actorOf(request);
    const { categoryId } = parseRequest(CategoryPath, request.params);
    const { horizonWeeks } = parseRequest(StartForecast, request.body);
    response.status(202).json(await startForecast(database, actor, categoryId, horizonWeeks));
  });
  router.put('/plan/categories/:categoryId/round', async (request, response) => {
    const actor = actorOf(request);
    const { categoryId } = parseRequest(CategoryPath, request.params);
    response.json(await changeRound(database, actor, categoryId, parseRequest(ChangeRound, request.body)));
  });

  router.get('/plan/lines/:lineId', async (request, response) => {
    const { lineId } = parseRequest(LinePath, request.params);
    const { historyWeeks } = parseRequest(LineQuery, request.query);
    response.json(await readLinePlan(database, actorOf(request), lineId, historyWeeks));
  });
  router.patch('/plan/lines/:lineId/overrides', async (request, response) => {
    const actor = actorOf(request);
    const { lineId } = parseRequest(LinePath, request.params);
    response.json(await saveOverrides(database, actor, lineId, parseRequest(SaveOverrides, request.body)));
  });
  router.get('/plan/lines/:lineId/why', async (request, response) => {
    const { lineId } = parseRequest(LinePath, request.params);
    const { itemId = null, locationId = null, week } = parseRequest(WhyQuery, request.query);
    response.json(
      await readWhy(database, actorOf(request), lineId, { scope: { itemId, locationId }, weekStart: week }),
    );
  });
  router.get('/plan/lines/:lineId/versions', async (request, response) => {
    const { lineId } = parseRequest(LinePath, request.params);
    response.json(await listVersions(database, actorOf(request), lineId));
  });
  router.get('/plan/lines/:lineId/versions/:number', async (request, response) => {
    const { lineId, number } = parseRequest(VersionPath, request.params);
    response.json(await readVersion(database, actorOf(request), lineId, number));
  });

  router.post('/plan/lines/:lineId/submit', async (request, response) => {
    const actor = actorOf(request);
    const { lineId } = parseRequest(LinePath, request.params);
    await submitLine(database, actor, lineId, parseRequest(SubmitLine, request.body));
    response.json(await readLinePlan(database, actor, lineId));
  });
  router.post('/plan/lines/:lineId/return', async (request, response) => {
    const actor = actorOf(request);
    const { lineId } = parseRequest(LinePath, request.params);
    await returnLine(database, actor, lineId, parseRequest(ReturnLine, request.body));
    response.json(await readLinePlan(database, actor, lineId));
  });
  router.post('/plan/lines/:lineId/lock', async (request, response) => {
    const actor = actorOf(request);
    const { lineId } = parseRequest(LinePath, request.params);
    await lockLine(database, actor, lineId, parseRequest(LockLine, request.body));
    response.json(await readLinePlan(database, actor, lineId));
  });
  router.post('/plan/lines/:lineId/unlock', async (request, response) => {
    const actor = actorOf(request);
    const { lineId } = parseRequest(LinePath, request.params);
    await unlockLine(database, actor, lineId, parseRequest(UnlockLine, request.body));
    response.json(await readLinePlan(database, actor, lineId));
  });
  return router;
}

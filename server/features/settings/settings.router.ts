import { Router, type Request } from 'express';
import { IdText } from '../../../shared/contracts/primitives.ts';
import { ChangePerson, ChangeSettings, InvitePerson, type InvitedPerson } from '../../../shared/contracts/settings.ts';
import type { Deps } from '../../lib/deps.ts';
import { actorOf } from '../../lib/http.ts';
import { parseRequest } from '../../lib/problem.ts';
import { changePerson, invitePerson, listPeople, renewInvitation } from '../accounts/accounts.service.ts';
import { changeSettings, listReasons, readSettings } from './settings.service.ts';

export function settingsRouter({ database, env }: Deps): Router {
  const router = Router();

  function linkTo(request: Request, path: string): string {
    return `${env.publicUrl ?? `${request.protocol}://${request.get('host') ?? ''}`}${path}`;
  }

  router.get('/settings', async (request, response) => {
    actorOf(request);
    response.json(await readSettings(database));
  });
  router.patch('/settings', async (request, response) => {
    response.json(await changeSettings(database, actorOf(request), parseRequest(ChangeSettings, request.body)));
  });
  router.get('/reasons', async (request, response) => {
    actorOf(request);
    response.json(await listReasons(database));
  });
  router.get('/people', async (request, response) => {
    response.json({ people: await listPeople(database, actorOf(request)) });
  });
  router.post('/people', async (request, response) => {
    const { person, path, expiresAt } = await invitePerson(
      database,
      actorOf(request),
      parseRequest(InvitePerson, request.body),
    );
    const answer: InvitedPerson = { person, link: linkTo(request, path), expiresAt: expiresAt.toISOString() };
    response.status(201).json(answer);
  });
  router.post('/people/:id/link', async (request, response) => {
    const { person, path, expiresAt } = await renewInvitation(
      database,
      actorOf(request),
      parseRequest(IdText, request.params.id),
    );
    const answer: InvitedPerson = { person, link: linkTo(request, path), expiresAt: expiresAt.toISOString() };
    response.status(201).json(answer);
  });
  router.patch('/people/:id', async (request, response) => {
    const id = parseRequest(IdText, request.params.id);
    response.json(await changePerson(database, actorOf(request), id, parseRequest(ChangePerson, request.body)));
  });
  return router;
}

import { Router, type CookieOptions, type RequestHandler, type Response } from 'express';
import { ipKeyGenerator, rateLimit } from 'express-rate-limit';
import { AcceptInvitation, SignIn, type Session } from '../../../shared/contracts/accounts.ts';
import { inTransaction } from '../../lib/database.ts';
import type { Deps } from '../../lib/deps.ts';
import { actorOf } from '../../lib/http.ts';
import { parseRequest, ProblemError } from '../../lib/problem.ts';
import { acceptInvitation, checkCredentials, loadActor, readInvitation, toPerson } from './accounts.service.ts';
import { sessionLifetimeMs, type Sessions } from './sessions.ts';

interface AccountsDeps extends Deps {
  sessions: Sessions;
}

function cookieOf({ env }: Deps): { name: string; options: CookieOptions } {
  const isSecure = env.publicUrl?.startsWith('https:') ?? false;
  return {
    name: isSecure ? '__Host-fairweek' : 'fairweek',
    options: { httpOnly: true, sameSite: 'lax', path: '/', secure: isSecure, maxAge: sessionLifetimeMs },
  };
}

/** Reads the session cookie into `request.actor`; without a valid one the request goes on as nobody. */
export function readSession(deps: AccountsDeps): RequestHandler {
  const { name, options } = cookieOf(deps);
  return async (request, response, next) => {
    const token = cookieValue(request.get('cookie'), name);
    const session = token === null ? null : await deps.sessions.read(token);
    if (token !== null && session) {
      const actor = await inTransaction(deps.database, (tx) => loadActor(tx, session.personId));
      if (actor) {
        request.actor = actor;
        request.sessionId = session.sessionId;
        if (session.isFresh) response.cookie(name, token, options);
      }
    }
    next();
  };
}

function cookieValue(header: string | undefined, name: string): string | null {
  for (const part of (header ?? '').split(';')) {
    const [key, value] = part.trim().split('=');
    if (key === name && value) return value;
  }
  return null;
}

export function accountsRouter(deps: AccountsDeps): Router {
  const { database, sessions, env } = deps;
  const cookie = cookieOf(deps);
  const router = Router();

  async function beginSession(response: Response, personId: number): Promise<Session> {
    response.cookie(cookie.name, await sessions.open(personId), cookie.options);
    const actor = await inTransaction(database, (tx) => loadActor(tx, personId));
    if (!actor) throw new ProblemError('wrong-credentials', 'This account can’t be used. Ask your administrator.');
    return { person: toPerson(actor), isDemo: env.isDemo };
  }

  const slowGuessing = rateLimit({
    windowMs: 15 * 60_000,
    limit: 25,
    skipSuccessfulRequests: true,
    standardHeaders: 'draft-8',
    legacyHeaders: false,
    keyGenerator: (request) => {
      const email = SignIn.shape.email.safeParse((request.body as { email?: unknown } | undefined)?.email);
      return `${ipKeyGenerator(request.ip ?? '')} ${email.success ? email.data.toLowerCase() : ''}`;
    },
    handler: () => {
      throw new ProblemError('too-many-attempts', 'Wait a quarter of an hour, then try again.');
    },
  });

  router.post('/session', slowGuessing, async (request, response) => {
    const personId = await checkCredentials(database, parseRequest(SignIn, request.body));
    if (request.sessionId) await sessions.close(request.sessionId);
    response.json(await beginSession(response, personId));
  });

  router.get('/session', (request, response) => {
    const session: Session = { person: toPerson(actorOf(request)), isDemo: env.isDemo };
    response.json(session);
  });

  router.delete('/session', async (request, response) => {
    if (request.sessionId) await sessions.close(request.sessionId);
    response
      .clearCookie(cookie.name, { ...cookie.options, maxAge: undefined })
      .status(204)
      .end();
  });

  router.get('/invitations/:token', async (request, response) => {
    response.json(await readInvitation(database, request.params.token));
  });

  router.post('/invitations/:token', async (request, response) => {
    const personId = await acceptInvitation(
      database,
      request.params.token,
      parseRequest(AcceptInvitation, request.body),
    );
    response.json(await beginSession(response, personId));
  });

  return router;
}

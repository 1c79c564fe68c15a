import type { Request, RequestHandler } from 'express';
import type { Actor } from './authorise.ts';
import { ProblemError } from './problem.ts';

declare module 'express-serve-static-core' {
  interface Request {
    /** Set by the session middleware when a valid session cookie came along. */
    actor?: Actor;
    sessionId?: string;
  }
}

/** The signed-in person; throws `not-signed-in` otherwise. */
export function actorOf(request: Request): Actor {
  if (!request.actor) throw new ProblemError('not-signed-in', 'Sign in to go on.');
  return request.actor;
}

/** Unsafe methods are taken from the own pages only: by Sec-Fetch-Site where the browser sends it, else by Origin. */
export const refuseForeignOrigin: RequestHandler = (request, _response, next) => {
  if (request.method === 'GET' || request.method === 'HEAD' || request.method === 'OPTIONS') {
    next();
    return;
  }
  const site = request.get('sec-fetch-site');
  const origin = request.get('origin');
  const isOwn =
    site === undefined
      ? origin === undefined || hostOf(origin) === request.get('host')
      : site === 'same-origin' || site === 'none';
  if (!isOwn) throw new ProblemError('foreign-origin', 'Open Fairweek itself and try again there.');
  next();
};

function hostOf(origin: string): string | null {
  try {
    return new URL(origin).host;
  } catch {
    return null;
  }
}

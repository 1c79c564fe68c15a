import { randomUUID } from 'node:crypto';
import { existsSync } from 'node:fs';
import path from 'node:path';
import compression from 'compression';
import express, { Router, type Express } from 'express';
import helmet from 'helmet';
import { pinoHttp } from 'pino-http';
import { accountsRouter, readSession } from './features/accounts/accounts.router.ts';
import { openSessions } from './features/accounts/sessions.ts';
import { calendarRouter } from './features/calendar/calendar.router.ts';
import { jobsRouter } from './features/jobs/jobs.router.ts';
import { linesRouter } from './features/lines/lines.router.ts';
import { packsRouter } from './features/packs/packs.router.ts';
import { planRouter } from './features/plan/plan.router.ts';
import { salesRouter } from './features/sales/sales.router.ts';
import { settingsRouter } from './features/settings/settings.router.ts';
import { waitingRouter } from './features/waiting/waiting.router.ts';
import type { Deps } from './lib/deps.ts';
import { refuseForeignOrigin } from './lib/http.ts';
import { problemHandler, ProblemError } from './lib/problem.ts';

const clientFolder = path.resolve(import.meta.dirname, '../dist');

/** The whole HTTP side: health, API and, once it is built, the client. Used by main and by tests alike. */
export function buildApp(deps: Deps): Express {
  const { log, database } = deps;
  const app = express();
  app.disable('x-powered-by');
  app.use(
    pinoHttp({
      logger: log,
      genReqId: () => randomUUID(),
      autoLogging: { ignore: (request) => !request.url?.startsWith('/api/') },
    }),
  );
  app.use(
    helmet({
      contentSecurityPolicy: {
        useDefaults: false,
        directives: {
          defaultSrc: ["'self'"],
          // Charts and virtual rows position their parts by style attributes.
          styleSrc: ["'self'", "'unsafe-inline'"],
          imgSrc: ["'self'", 'data:'],
          objectSrc: ["'none'"],
          baseUri: ["'none'"],
          formAction: ["'self'"],
          frameAncestors: ["'none'"],
        },
      },
      strictTransportSecurity: deps.env.publicUrl?.startsWith('https:') ?? false,
    }),
  );

  app.use(compression());

  app.get('/health/live', (_request, response) => {
    response.json({ status: 'live' });
  });
  app.get('/health/ready', async (_request, response) => {
    try {
      await database.pool.query('select 1');
      response.json({ status: 'ready' });
    } catch {
      response.status(503).json({ status: 'database away' });
    }
  });

  const sessions = openSessions(database);
  const api = Router();
  api.use((_request, response, next) => {
    response.set('cache-control', 'no-store');
    next();
  });
  api.use(refuseForeignOrigin, readSession({ ...deps, sessions }), express.json({ limit: '8mb' }));
  api.use(accountsRouter({ ...deps, sessions }));
  for (const router of [
    jobsRouter,
    linesRouter,
    salesRouter,
    calendarRouter,
    planRouter,
    packsRouter,
    waitingRouter,
    settingsRouter,
  ]) {
    api.use(router(deps));
  }
  api.use((request) => {
    throw new ProblemError('not-found', `There is nothing at ${request.path}.`);
  });
  app.use('/api', api);

  if (existsSync(path.join(clientFolder, 'index.html'))) {
    app.use(
      '/assets',
      express.static(path.join(clientFolder, 'assets'), { immutable: true, maxAge: '1y', fallthrough: false }),
    );
    app.use(express.static(clientFolder, { index: false }));
    app.get('/{*page}', (_request, response) => {
      response.set('cache-control', 'no-cache').sendFile(path.join(clientFolder, 'index.html'));
    });
  }
  app.use(problemHandler);
  return app;
}

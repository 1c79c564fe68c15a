import { createServer, type Server } from 'node:http';
import type { AddressInfo } from 'node:net';
import { afterAll, afterEach, beforeAll, describe, expect, it, vi } from 'vitest';
import { z } from 'zod';
import { apiPath, describeError, onSignedOut, ProblemError, request, requestNothing } from '../../../src/lib/api.ts';

const Answer = z.object({ units: z.number() });
const answers: Record<string, { status: number; type: string; body: string }> = {
  '/api/good': { status: 200, type: 'application/json', body: '{"units":3}' },
  '/api/other': { status: 200, type: 'application/json', body: '{"units":"three"}' },
  '/api/nothing': { status: 204, type: 'text/plain', body: '' },
  '/api/locked': {
    status: 409,
    type: 'application/problem+json',
    body: JSON.stringify({
      type: '/problems/stale-cells',
      title: 'Changed by somebody else',
      status: 409,
      detail: 'Pick a value.',
      instance: 'r1',
      conflicts: [{ yours: 1 }],
    }),
  },
  '/api/who': {
    status: 401,
    type: 'application/problem+json',
    body: JSON.stringify({
      type: '/problems/not-signed-in',
      title: 'Please sign in',
      status: 401,
      detail: 'Sign in.',
      instance: 'r2',
    }),
  },
  '/api/door': {
    status: 401,
    type: 'application/problem+json',
    body: JSON.stringify({
      type: '/problems/wrong-credentials',
      title: 'Sign-in failed',
      status: 401,
      detail: 'Check both.',
      instance: 'r3',
    }),
  },
  '/api/proxy': { status: 502, type: 'text/html', body: '<h1>Bad gateway</h1>' },
};

let server: Server;
let origin: string;
const realFetch = globalThis.fetch;

beforeAll(async () => {
  server = createServer((incoming, response) => {
    const answer = answers[incoming.url ?? ''];
    response.writeHead(answer?.status ?? 404, { 'content-type': answer?.type ?? 'text/plain' });
    response.end(answer?.body ?? '');
  });
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  origin = `http://127.0.0.1:${(server.address() as AddressInfo).port}`;
  // The page's own origin, which a browser adds by itself.
  vi.stubGlobal('fetch', (path: string, options: RequestInit) => realFetch(origin + path, options));
});
afterAll(async () => {
  vi.unstubAllGlobals();
  await new Promise((resolve) => server.close(resolve));
});

const stops: (() => void)[] = [];
afterEach(() => {
  for (const stop of stops.splice(0)) stop();
});

async function problemOf(promise: Promise<unknown>): Promise<ProblemError> {
  const error = await promise.then(
    () => null,
    (thrown: unknown) => thrown,
  );
  expect(error).toBeInstanceOf(ProblemError);
  return error as ProblemError;
}

describe('an answer', () => {
  it('is handed over as its contract says', async () => {
    expect(await request(Answer, '/good')).toEqual({ units: 3 });
  });

  it('that breaks its contract is refused, not passed on', async () => {
    expect((await problemOf(request(Answer, '/other'))).type).toBe('unreadable-answer');
  });

  it('without content is awaited all the same', async () => {
    await expect(requestNothing('/nothing', { method: 'DELETE' })).resolves.toBeUndefined();
  });
});

describe('a problem', () => {
  it('keeps its type, what the person can do, and the conflicts', async () => {
    const problem = await problemOf(request(Answer, '/locked'));
    expect(problem).toMatchObject({ type: 'stale-cells', status: 409, detail: 'Pick a value.' });
    expect(problem.conflicts).toEqual([{ yours: 1 }]);
  });

  it('of nobody being signed in is told to who listens, a wrong password is not', async () => {
    const heard = vi.fn();
    stops.push(onSignedOut(heard));
    await problemOf(request(Answer, '/door'));
    expect(heard).not.toHaveBeenCalled();
    await problemOf(request(Answer, '/who'));
    expect(heard).toHaveBeenCalledOnce();
  });

  it('that is no problem document becomes one with a sentence', async () => {
    const problem = await problemOf(request(Answer, '/proxy'));
    expect(problem).toMatchObject({ type: 'unexpected', status: 502 });
    expect(describeError(problem).detail).toContain('502');
  });

  it('of a server that is away says that nothing was changed', async () => {
    vi.stubGlobal('fetch', () => realFetch('http://127.0.0.1:1/'));
    const problem = await problemOf(request(Answer, '/good'));
    expect(problem.type).toBe('unreachable');
    expect(problem.detail).toContain('nothing was changed');
    vi.stubGlobal('fetch', (path: string, options: RequestInit) => realFetch(origin + path, options));
  });
});

it('leaves unanswered parts out of the query', () => {
  expect(apiPath('/imports', { categoryId: null, weeks: 4, name: undefined })).toBe('/api/imports?weeks=4');
});

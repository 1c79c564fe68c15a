import { spawnSync } from 'node:child_process';
import { get } from 'node:http';
import type { AddressInfo } from 'node:net';
import { chromium } from '@playwright/test';
import { buildApp } from '../../app.ts';
import { openSessions } from '../../features/accounts/sessions.ts';
import { readEnv } from '../../lib/env.ts';
import { openLog } from '../../lib/log.ts';
import { buildClientIfChanged } from '../client-build.ts';
import { databaseUrl } from '../cluster.ts';
import { PlainFailure } from '../plain-failure.ts';
import { chromiumPath } from '../system-programs.ts';
import { withBenchDatabase, type BenchDatabase } from './bench-database.ts';
import { takeTurns, writeDuration, type BenchRow } from './measure.ts';
import { storePlan } from './stored-plan.ts';

/** Serves the app on loopback for the length of `work`. */
async function serve<T>(
  { database, actor, cluster, name }: BenchDatabase,
  work: (address: string, token: string) => Promise<T>,
): Promise<T> {
  const env = readEnv({ DATABASE_URL: databaseUrl(cluster, 'fairweek_application', name), LOG_LEVEL: 'silent' });
  const server = buildApp({ database, env, log: openLog('silent') }).listen(0, '127.0.0.1');
  try {
    await new Promise((resolve) => server.once('listening', resolve));
    const { port } = server.address() as AddressInfo;
    return await work(`http://127.0.0.1:${port}`, await openSessions(database).open(actor.id));
  } finally {
    server.closeAllConnections();
    await new Promise((resolve) => server.close(resolve));
  }
}

/** Milliseconds until the last byte, and the bytes as they came over the wire. */
function fetchBytes(url: string, cookie: string): Promise<{ milliseconds: number; bytes: number }> {
  return new Promise((resolve, reject) => {
    const startedAt = performance.now();
    get(url, { headers: { cookie, 'accept-encoding': 'br, gzip' } }, (response) => {
      let bytes = 0;
      response.on('data', (chunk: Buffer) => (bytes += chunk.length));
      response.on('end', () => {
        if (response.statusCode === 200) resolve({ milliseconds: performance.now() - startedAt, bytes });
        else reject(new Error(`${url} answered ${response.statusCode}`));
      });
    }).on('error', reject);
  });
}

/** Milliseconds of `\copy` of a query to nowhere, by psql's own clock. */
function timeCopyOut(url: string, query: string): number {
  const { stdout, stderr, status } = spawnSync(
    'psql',
    ['-X', url, '-c', '\\timing on', '-c', `\\copy (${query}) to '/dev/null'`],
    { encoding: 'utf8' },
  );
  const took = /Time: ([\d.]+) ms/.exec(stdout);
  if (status !== 0 || !took) throw new PlainFailure(`psql did not copy: ${stderr}`);
  return Number(took[1]);
}

export const readGrid: BenchRow = {
  name: 'read-grid',
  run: () =>
    withBenchDatabase(async (given) => {
      const lineId = (await storePlan(given, { lines: 1, items: 600, weeks: 52 }))[0]!.lineId;
      const query =
        `select s.item_id, s.location_id, p.plan, s.model, s.base, s.p10, s.p90, s.price from plan_series p ` +
        `join run_series s on s.line_id = p.line_id and s.item_id = p.item_id and s.location_id = p.location_id where p.line_id = ${lineId}`;
      const url = databaseUrl(given.cluster, 'fairweek_application', given.name);
      return serve(given, async (address, token) => {
        let size = 0;
        const lengths = await takeTurns(
          {
            ours: async () => {
              const { milliseconds, bytes } = await fetchBytes(
                `${address}/api/plan/lines/${lineId}?historyWeeks=0`,
                `fairweek=${token}`,
              );
              size = bytes;
              return milliseconds;
            },
            peer: () => timeCopyOut(url, query),
          },
          9,
        );
        const common = {
          row: 'read-grid',
          ours: writeDuration(lengths.ours),
          beside: `psql \\copy ${writeDuration(lengths.peer)}`,
        };
        return [
          {
            ...common,
            work: '600 rows × 52 weeks over HTTP, all the page needs',
            value: lengths.ours / lengths.peer,
            unit: '× peer',
            must: { atMost: 3 },
            goal: { atMost: 1 },
          },
          {
            ...common,
            work: 'the same, bytes over the wire',
            value: size / 1000,
            unit: 'kB',
            must: { atMost: 500 },
            goal: { atMost: 400 },
          },
        ];
      });
    }),
};

/** Bytes that a browser with an empty cache gets over the wire until the page is quiet. */
async function weighPage(url: string, token: string | null): Promise<number> {
  const browser = await chromium.launch({
    executablePath: chromiumPath,
    args: ['--no-sandbox', '--disable-gpu', '--disable-background-networking', '--disable-component-update'],
  });
  try {
    const context = await browser.newContext();
    if (token !== null) await context.addCookies([{ name: 'fairweek', value: token, url }]);
    const page = await context.newPage();
    const devtools = await context.newCDPSession(page);
    await devtools.send('Network.enable');
    let bytes = 0;
    devtools.on('Network.loadingFinished', ({ encodedDataLength }) => (bytes += encodedDataLength));
    await page.goto(url, { waitUntil: 'networkidle' });
    return bytes;
  } finally {
    await browser.close();
  }
}

export const firstPage: BenchRow = {
  name: 'first-page',
  run: () =>
    withBenchDatabase(async (given) => {
      await buildClientIfChanged();
      const lineId = (await storePlan(given, { lines: 1, items: 12, weeks: 13 }))[0]!.lineId;
      return serve(given, async (address, token) => {
        const pages = [
          { work: 'sign-in page', path: '/', token: null, must: 250, goal: 150 },
          { work: 'plan page of 12 items × 13 weeks', path: `/plan/${lineId}`, token, must: 400, goal: 250 },
        ];
        const figures = [];
        for (const page of pages) {
          const value = (await weighPage(`${address}${page.path}`, page.token)) / 1000;
          figures.push({
            row: 'first-page',
            work: `${page.work}, cold cache, bytes over the wire`,
            ours: '–',
            beside: '–',
            value,
            unit: 'kB',
            must: { atMost: page.must },
            goal: { atMost: page.goal },
          });
        }
        return figures;
      });
    }),
};

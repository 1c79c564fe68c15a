import { expect, test as base } from '@playwright/test';
import { startInstallation, type InstallationFacts } from './installation.ts';

export { expect };

interface Fixtures {
  /** The demo installation that all specs of a run share. */
  demo: InstallationFacts;
  /** What the page may write as an error although all is well; empty unless a spec adds to it. */
  expectedPageErrors: RegExp[];
  /** Fails the test on an error in the browser's console, an uncaught exception, or a request beyond the page's own origin. */
  watchPage: undefined;
}

interface WorkerFixtures {
  /** An installation without demo, started for the specs that ask for it. */
  emptyInstallation: InstallationFacts;
}

/** The browser itself reports every answer of 400 and more; whether those are right is each spec's own business. */
const reportOfAnswer = /^Failed to load resource: the server responded with a status of/;

export const test = base.extend<Fixtures, WorkerFixtures>({
  demo: async ({}, use) => use(readDemoFacts()),
  baseURL: async ({ demo }, use) => use(demo.address),
  expectedPageErrors: async ({}, use) => use([]),
  watchPage: [
    async ({ context, expectedPageErrors }, use) => {
      const found: string[] = [];
      context.on('console', (message) => {
        if (message.type() === 'error' && !reportOfAnswer.test(message.text())) found.push(message.text());
      });
      context.on('weberror', (error) => found.push(String(error.error())));
      context.on('request', (request) => {
        const { protocol, hostname } = new URL(request.url());
        if (/^https?:$/.test(protocol) && hostname !== '127.0.0.1') found.push(`asks for ${request.url()}`);
      });
      await use(undefined);
      expect(found.filter((text) => !expectedPageErrors.some((expected) => expected.test(text)))).toEqual([]);
    },
    { auto: true },
  ],
  emptyInstallation: [
    async ({}, use) => {
      const { stop, ...facts } = await startInstallation('empty');
      await use(facts);
      await stop();
    },
    { scope: 'worker', timeout: 120_000 },
  ],
});

function readDemoFacts(): InstallationFacts {
  const text = process.env.FAIRWEEK_DEMO_INSTALLATION;
  if (!text) throw new Error('The demo installation was not started: run through playwright.config.ts.');
  return JSON.parse(text) as InstallationFacts;
}

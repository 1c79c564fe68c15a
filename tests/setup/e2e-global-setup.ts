import { startInstallation } from './installation.ts';

/** One installation with the demo company for the whole run; specs reach it through tests/setup/e2e.ts. */
export default async function setUp(): Promise<() => Promise<void>> {
  const { stop, ...facts } = await startInstallation('demo');
  process.env.FAIRWEEK_DEMO_INSTALLATION = JSON.stringify(facts);
  return stop;
}

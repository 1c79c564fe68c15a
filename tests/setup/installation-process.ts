import { join } from 'node:path';
import { buildClientIfChanged } from '../../server/cli/client-build.ts';
import { prepareDataFolder } from '../../server/cli/data-folder.ts';
import { findFreePort } from '../../server/cli/ports.ts';
import { startServices, type ServiceEnvironment } from '../../server/cli/services.ts';
import { offerFirstAdministrator } from '../../server/features/accounts/accounts.service.ts';
import { openDatabase } from '../../server/lib/database.ts';
import { cloneDatabase } from './clone-database.ts';
import { prepareDemoTemplate } from './demo-template.ts';
import type { InstallationFacts } from './installation.ts';
import { prepareTestCluster } from './template-database.ts';

/**
 * A whole installation for end-to-end tests, in a process of its own: database copy, server, worker. Argument: `demo` or `empty`. Sends its
 * InstallationFacts to its parent when ready; ends, and takes everything with it, on SIGTERM or when the parent goes.
 */
const hasDemo = process.argv[2] === 'demo';
const stopAsked = new Promise<void>((resolve) => {
  for (const signal of ['SIGINT', 'SIGTERM'] as const) process.on(signal, () => resolve());
  process.on('disconnect', () => resolve());
});

const cluster = await prepareTestCluster();
const demo = hasDemo ? await prepareDemoTemplate(cluster) : null;
const database = await cloneDatabase(cluster, demo?.template);
const port = await findFreePort(54_700 + (process.pid % 500));
const address = `http://127.0.0.1:${port}`;
const environment: ServiceEnvironment = {
  DATABASE_URL: database.applicationUrl,
  MIGRATOR_URL: database.migratorUrl,
  PORT: String(port),
  HOST: '127.0.0.1',
  PUBLIC_URL: address,
  DEMO: hasDemo ? '1' : '0',
  NODE_ENV: 'production',
};
try {
  await buildClientIfChanged();
  const firstAdministratorLink = hasDemo ? null : await offerLink();
  const services = await startServices(environment, join(prepareDataFolder('test'), 'logs', database.name));
  await services.ready;
  const facts: InstallationFacts = {
    address,
    signIns: demo?.signIns ?? [],
    firstAdministratorLink,
    ownerUrl: database.ownerUrl,
  };
  process.send?.(facts);
  await stopAsked;
  await services.stop();
} finally {
  await database.drop();
}
process.exit();

async function offerLink(): Promise<string> {
  const connection = openDatabase(environment.DATABASE_URL, { poolSize: 1 });
  try {
    return `${address}/invitation/${await offerFirstAdministrator(connection)}`;
  } finally {
    await connection.close();
  }
}

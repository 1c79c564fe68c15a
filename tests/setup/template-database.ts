import { createHash } from 'node:crypto';
import { readdirSync, readFileSync } from 'node:fs';
import { join, relative } from 'node:path';
import type { TestProject } from 'vitest/node';
import {
  createDatabase,
  databaseUrl,
  ensureCluster,
  withClient,
  type ClusterAccess,
} from '../../server/cli/cluster.ts';
import { projectFolder } from '../../server/cli/data-folder.ts';
import { ensureSystemPackages } from '../../server/cli/debian-packages.ts';
import { migrate } from '../../server/lib/migrate.ts';

export interface TestCluster extends ClusterAccess {
  template: string;
}

declare module 'vitest' {
  export interface ProvidedContext {
    testCluster: TestCluster;
  }
}

const templateLock = 4_310_001;

/**
 * Starts the tests' own cluster if it isn't running and migrates one template database per state of the migrations; a run with the same
 * migrations finds it ready. The cluster is left running for the next run: `npm test` stops it at its end.
 */
export default async function setUp(project: TestProject): Promise<void> {
  ensureSystemPackages('start');
  project.provide('testCluster', await prepareTestCluster());
}

/** The running cluster and the name of its migrated template database. */
export async function prepareTestCluster(): Promise<TestCluster> {
  const { port, rolePasswords } = await ensureCluster('test');
  const access = { port, rolePasswords };
  const template = `template_${fingerprintSources(['server/migrations', 'server/lib/migrate.ts'])}`;
  await withClient(databaseUrl(access, 'owner', 'postgres'), async (client) => {
    await client.query('SELECT pg_advisory_lock($1)', [templateLock]);
    await dropLeftovers(client, template);
    const { rowCount } = await client.query('SELECT 1 FROM pg_database WHERE datname = $1', [template]);
    if (rowCount) return;
    const unfinished = `${template}_unfinished`;
    await client.query(`DROP DATABASE IF EXISTS ${unfinished} WITH (FORCE)`);
    await createDatabase(access, unfinished);
    await migrate(databaseUrl(access, 'fairweek_migrator', unfinished));
    await client.query(`ALTER DATABASE ${unfinished} RENAME TO ${template}`);
    await client.query(`ALTER DATABASE ${template} ALLOW_CONNECTIONS false`);
  });
  return { ...access, template };
}

/** Copies of runs that were cut off (their process is gone), and templates of older migrations once nobody can be copying them. */
async function dropLeftovers(
  client: { query: (sql: string) => Promise<{ rows: Found[] }> },
  template: string,
): Promise<void> {
  const { rows } = await client.query(
    `SELECT datname AS name, (pg_stat_file('base/' || oid || '/PG_VERSION', true)).modification < now() - interval '1 hour' AS "isOld"
       FROM pg_database WHERE datname ~ '^(test_[0-9]+_|(template|demo)_[0-9a-f]+$)'`,
  );
  for (const { name, isOld } of rows) {
    const process = /^test_(\d+)_/.exec(name)?.[1];
    const isLeftover = process ? !isAlive(Number(process)) : isOld && name !== template;
    if (isLeftover) await client.query(`DROP DATABASE IF EXISTS ${name} WITH (FORCE)`);
  }
}

interface Found {
  name: string;
  isOld: boolean;
}

function isAlive(pid: number): boolean {
  try {
    process.kill(pid, 0);
    return true;
  } catch (error) {
    return (error as NodeJS.ErrnoException).code === 'EPERM';
  }
}

/** The part of a template's name that changes with the files it is made by: those given and all in the folders given. */
export function fingerprintSources(sources: readonly string[]): string {
  const hash = createHash('sha256');
  for (const file of sources.flatMap(listFiles).sort())
    hash.update(file).update(readFileSync(join(projectFolder, file)));
  return hash.digest('hex').slice(0, 12);
}

function listFiles(source: string): string[] {
  if (source.endsWith('.ts')) return [source];
  return readdirSync(join(projectFolder, source), { recursive: true, withFileTypes: true })
    .filter((entry) => entry.isFile())
    .map((entry) => relative(projectFolder, join(entry.parentPath, entry.name)));
}

import { spawn } from 'node:child_process';
import {
  chownSync,
  closeSync,
  existsSync,
  mkdirSync,
  openSync,
  readFileSync,
  rmSync,
  statSync,
  writeFileSync,
} from 'node:fs';
import { join } from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';
import pg from 'pg';
import {
  databaseRoles,
  loadInstallation,
  needsPostgresUser,
  prepareDataFolder,
  saveInstallation,
  type ClusterPurpose,
  type DatabaseRole,
  type Installation,
} from './data-folder.ts';
import { PlainFailure } from './plain-failure.ts';
import { findFreePort, isPortFree } from './ports.ts';
import { findPostgresBinaries, type PostgresBinaries } from './postgres-binaries.ts';

/** A running PostgreSQL server of this checkout's own. */
export interface Cluster {
  dataFolder: string;
  port: number;
  rolePasswords: Record<DatabaseRole, string>;
  /** Whether it was already running when it was asked for. */
  wasRunning: boolean;
  /** Stops it, unless somebody else is connected. Returns whether it stopped. */
  stop: () => Promise<boolean>;
}

export type ClusterAccess = Pick<Cluster, 'port' | 'rolePasswords'>;

interface Place {
  binaries: PostgresBinaries;
  dataFolder: string;
  databaseFolder: string;
  logFile: string;
  installation: Installation;
}

const host = '127.0.0.1';
const firstPorts = { start: 54310, test: 54510, bench: 54710 };

const servingSettings = ['max_connections = 100', 'shared_buffers = 256MB', 'synchronous_commit = on'];

const settingsFor = {
  start: servingSettings,
  // What is measured must be what people get.
  bench: servingSettings,
  test: [
    'max_connections = 200',
    'shared_buffers = 256MB',
    'fsync = off',
    'synchronous_commit = off',
    'full_page_writes = off',
    'max_wal_size = 4GB',
    'autovacuum_naptime = 5min',
  ],
};

/** Connection string of a role to a database of that cluster. */
export function databaseUrl({ port, rolePasswords }: ClusterAccess, role: DatabaseRole, database: string): string {
  return `postgres://${role}:${encodeURIComponent(rolePasswords[role])}@${host}:${port}/${database}`;
}

/**
 * Makes (once) and starts the checkout's own cluster on loopback: TCP only, scram, data checksums, four roles. Repeatable: a running one is
 * taken over, one that died is started again. Throws PlainFailure with what the person can do.
 */
export async function ensureCluster(purpose: ClusterPurpose): Promise<Cluster> {
  const dataFolder = prepareDataFolder(purpose);
  return whileAlone(join(dataFolder, 'starting.lock'), async () => {
    const place = findPlace(dataFolder);
    if (!existsSync(place.databaseFolder)) await createCluster(place);
    const wasRunning = await isServing(place);
    if (!wasRunning) await startCluster(place, purpose);
    await createRoles(place);
    const port = portOf(place);
    const { rolePasswords } = place.installation;
    return { dataFolder, port, rolePasswords, wasRunning, stop: () => stopCluster(place) };
  });
}

function findPlace(dataFolder: string): Place {
  const databaseFolder = join(dataFolder, 'cluster', 'db');
  const versionFile = join(databaseFolder, 'PG_VERSION');
  const major = existsSync(databaseFolder) ? Number(readFileSync(versionFile, 'utf8')) : undefined;
  const binaries = findPostgresBinaries(major);
  if (!binaries) {
    throw new PlainFailure(
      major === undefined
        ? 'PostgreSQL 15 or later was not found on this system.'
        : `The data in ${databaseFolder} were made by PostgreSQL ${major}, whose programs are no longer on this system. Install postgresql-${major}, or move the data with pg_upgrade.`,
    );
  }
  const logFile = join(dataFolder, 'cluster', 'postgresql.log');
  return { binaries, dataFolder, databaseFolder, logFile, installation: loadInstallation(dataFolder) };
}

function portOf({ installation }: Place): number {
  if (installation.port === null) throw new Error('The cluster has no port yet.');
  return installation.port;
}

/** initdb works in a folder beside and is renamed at its end, so that a cut-off first start leaves nothing half-made. */
async function createCluster(place: Place): Promise<void> {
  const { binaries, dataFolder, databaseFolder, installation } = place;
  console.log(`Making a PostgreSQL ${binaries.major} cluster in ${databaseFolder} …`);
  const clusterFolder = join(dataFolder, 'cluster');
  const unfinished = `${databaseFolder}.unfinished`;
  mkdirSync(clusterFolder, { recursive: true, mode: 0o700 });
  await giveToPostgresUser(clusterFolder);
  rmSync(unfinished, { recursive: true, force: true });
  const passwordFile = join(clusterFolder, 'owner-password');
  writeFileSync(passwordFile, installation.rolePasswords.owner, { mode: 0o600 });
  await giveToPostgresUser(passwordFile);
  try {
    await runAsPostgresUser(join(binaries.folder, 'initdb'), [
      ...['-D', unfinished, '-U', 'owner', `--pwfile=${passwordFile}`, '--auth-host=scram-sha-256'],
      ...['--auth-local=scram-sha-256', '-E', 'UTF8', '--locale=C.UTF-8', '--data-checksums'],
    ]);
    await runAsPostgresUser('mv', [unfinished, databaseFolder]);
  } finally {
    rmSync(passwordFile, { force: true });
  }
}

async function startCluster(place: Place, purpose: ClusterPurpose): Promise<void> {
  const { binaries, databaseFolder, logFile, installation } = place;
  await clearPidFile(place);
  const remembered = installation.port;
  const port =
    remembered !== null && (await isPortFree(remembered)) ? remembered : await findFreePort(firstPorts[purpose]);
  if (port !== remembered) {
    installation.port = port;
    saveInstallation(place.dataFolder, installation);
  }
  writeSettings(place, [`port = ${port}`, ...settingsFor[purpose]]);
  await giveToPostgresUser(join(databaseFolder, 'postgresql.auto.conf'));
  const result = await tryAsPostgresUser(join(binaries.folder, 'pg_ctl'), [
    ...['-D', databaseFolder, '-w', '-t', '60', '-l', logFile, 'start'],
  ]);
  if (result.code !== 0 || !(await isServing(place))) {
    const log = existsSync(logFile)
      ? readFileSync(logFile, 'utf8').trimEnd().split('\n').slice(-8).join('\n')
      : result.output;
    throw new PlainFailure(`PostgreSQL did not start. The last lines of ${logFile}:\n${log}`);
  }
}

function writeSettings({ databaseFolder }: Place, settings: string[]): void {
  const lines = [
    `listen_addresses = '${host}'`,
    `unix_socket_directories = ''`,
    `password_encryption = 'scram-sha-256'`,
    `timezone = 'UTC'`,
    `log_timezone = 'UTC'`,
    ...settings,
  ];
  writeFileSync(join(databaseFolder, 'postgresql.auto.conf'), `${lines.join('\n')}\n`, { mode: 0o600 });
}

/** Whether this cluster, and not some other server on its port, answers the owner. */
async function isServing(place: Place): Promise<boolean> {
  if (place.installation.port === null) return false;
  try {
    const answer = await asOwner(place, 'postgres', (client) =>
      client.query<{ data_directory: string }>('SHOW data_directory'),
    );
    return isSameFolder(answer.rows[0]?.data_directory ?? '', place.databaseFolder);
  } catch {
    return false;
  }
}

function isSameFolder(one: string, other: string): boolean {
  if (!existsSync(one) || !existsSync(other)) return false;
  const [a, b] = [statSync(one), statSync(other)];
  return a.dev === b.dev && a.ino === b.ino;
}

/**
 * A pid file is left behind by a server that was killed, and its number may meanwhile belong to any other program, which PostgreSQL would take
 * for itself. A server that is still coming up or going down is waited for, at most 30 s.
 */
async function clearPidFile(place: Place): Promise<void> {
  const pidFile = join(place.databaseFolder, 'postmaster.pid');
  for (let attempt = 0; attempt < 60 && existsSync(pidFile); attempt += 1) {
    const pid = Number(readFileSync(pidFile, 'utf8').split('\n')[0]);
    if (!isPostgresProcess(pid)) {
      rmSync(pidFile, { force: true });
      return;
    }
    if (await isServing(place)) return;
    await sleep(500);
  }
}

function isPostgresProcess(pid: number): boolean {
  try {
    process.kill(pid, 0);
  } catch (error) {
    return (error as NodeJS.ErrnoException).code === 'EPERM';
  }
  const commandFile = `/proc/${pid}/cmdline`;
  return (
    !existsSync('/proc/self/cmdline') || (existsSync(commandFile) && /postgres/.test(readFileSync(commandFile, 'utf8')))
  );
}

/** The three roles beside the owner; database rights follow in `createDatabase`, table rights in the migrations. */
async function createRoles(place: Place): Promise<void> {
  await asOwner(place, 'postgres', async (client) => {
    const { rows } = await client.query<{ rolname: string }>('SELECT rolname FROM pg_roles WHERE rolname = ANY($1)', [
      databaseRoles,
    ]);
    const present = new Set(rows.map((row) => row.rolname));
    for (const role of databaseRoles.filter((name) => !present.has(name))) {
      await client.query(
        `CREATE ROLE ${role} LOGIN NOSUPERUSER NOCREATEDB NOCREATEROLE PASSWORD ${client.escapeLiteral(place.installation.rolePasswords[role])}`,
      );
    }
  });
}

/**
 * Creates a database that belongs to the migrator, empty or as a copy of `template`; the other two roles may connect, nobody else.
 * Returns false, and leaves it alone, if it's there already.
 */
export async function createDatabase(cluster: ClusterAccess, database: string, template?: string): Promise<boolean> {
  return withClient(databaseUrl(cluster, 'owner', 'postgres'), async (client) => {
    const name = client.escapeIdentifier(database);
    const { rowCount } = await client.query('SELECT 1 FROM pg_database WHERE datname = $1', [database]);
    if (rowCount) return false;
    await client.query(
      `CREATE DATABASE ${name} OWNER fairweek_migrator${template ? ` TEMPLATE ${client.escapeIdentifier(template)}` : ''}`,
    );
    await client.query(`REVOKE ALL ON DATABASE ${name} FROM PUBLIC`);
    await client.query(`GRANT CONNECT, TEMPORARY ON DATABASE ${name} TO fairweek_application`);
    await client.query(`GRANT CONNECT ON DATABASE ${name} TO fairweek_reader`);
    return true;
  });
}

async function stopCluster(place: Place): Promise<boolean> {
  for (let attempt = 0; attempt < 4; attempt += 1) {
    if (!(await isServing(place))) return true;
    if (!(await isUsedByOthers(place))) {
      await runAsPostgresUser(join(place.binaries.folder, 'pg_ctl'), [
        '-D',
        place.databaseFolder,
        '-w',
        '-m',
        'fast',
        'stop',
      ]);
      return true;
    }
    await sleep(500);
  }
  return false;
}

async function isUsedByOthers(place: Place): Promise<boolean> {
  return asOwner(place, 'postgres', async (client) => {
    const { rowCount } = await client.query(
      `SELECT 1 FROM pg_stat_activity WHERE backend_type = 'client backend' AND pid <> pg_backend_pid()`,
    );
    return (rowCount ?? 0) > 0;
  });
}

function asOwner<T>(place: Place, database: string, work: (client: pg.Client) => Promise<T>): Promise<T> {
  const access = { port: portOf(place), rolePasswords: place.installation.rolePasswords };
  return withClient(databaseUrl(access, 'owner', database), work);
}

/** One connection for the length of `work`. */
export async function withClient<T>(url: string, work: (client: pg.Client) => Promise<T>): Promise<T> {
  const client = new pg.Client({ connectionString: url, connectionTimeoutMillis: 5_000 });
  // A server that stops while the connection is idle reports it here; the query that follows throws by itself.
  client.on('error', () => undefined);
  await client.connect();
  try {
    return await work(client);
  } finally {
    await client.end();
  }
}

/** Several commands may start at once in one checkout; a lock whose holder is dead is taken over. */
async function whileAlone<T>(lockFile: string, work: () => Promise<T>): Promise<T> {
  while (!takeLock(lockFile)) {
    const holder = existsSync(lockFile) ? Number(readFileSync(lockFile, 'utf8')) : 0;
    if (holder > 0 && !isAlive(holder)) rmSync(lockFile, { force: true });
    await sleep(200);
  }
  try {
    return await work();
  } finally {
    rmSync(lockFile, { force: true });
  }
}

function takeLock(lockFile: string): boolean {
  try {
    const descriptor = openSync(lockFile, 'wx', 0o600);
    writeFileSync(descriptor, String(process.pid));
    closeSync(descriptor);
    return true;
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code === 'EEXIST') return false;
    throw new PlainFailure(
      `${lockFile} can't be written (${(error as Error).message}). Run the command as the folder's owner.`,
    );
  }
}

function isAlive(pid: number): boolean {
  try {
    process.kill(pid, 0);
    return true;
  } catch (error) {
    return (error as NodeJS.ErrnoException).code === 'EPERM';
  }
}

async function giveToPostgresUser(path: string): Promise<void> {
  if (!needsPostgresUser()) return;
  const [user, group] = await Promise.all([
    runProgram('id', ['-u', 'postgres']).then(({ output }) => Number(output)),
    runProgram('id', ['-g', 'postgres']).then(({ output }) => Number(output)),
  ]);
  chownSync(path, user, group);
}

async function runAsPostgresUser(program: string, args: string[]): Promise<void> {
  const { code, output } = await tryAsPostgresUser(program, args);
  if (code !== 0) throw new PlainFailure(`${program} ended with code ${code}:\n${output}`);
}

/** Runs in `/`: the present folder may be closed to PostgreSQL's user. */
function tryAsPostgresUser(program: string, args: string[]): Promise<{ code: number; output: string }> {
  return needsPostgresUser()
    ? runProgram('runuser', ['-u', 'postgres', '--', program, ...args])
    : runProgram(program, args);
}

function runProgram(program: string, args: string[]): Promise<{ code: number; output: string }> {
  return new Promise((resolve, reject) => {
    const child = spawn(program, args, { cwd: '/', stdio: ['ignore', 'pipe', 'pipe'] });
    let output = '';
    child.stdout.on('data', (chunk: Buffer) => (output += chunk.toString()));
    child.stderr.on('data', (chunk: Buffer) => (output += chunk.toString()));
    child.on('error', reject);
    child.on('close', (code) => resolve({ code: code ?? 1, output: output.trim() }));
  });
}

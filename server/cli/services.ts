import { spawn, type ChildProcess } from 'node:child_process';
import { closeSync, existsSync, mkdirSync, openSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { setTimeout as sleep } from 'node:timers/promises';
import { projectFolder } from './data-folder.ts';
import { PlainFailure } from './plain-failure.ts';

/** What the server and the worker read from their environment (server/lib/env.ts). */
export interface ServiceEnvironment {
  DATABASE_URL: string;
  MIGRATOR_URL: string;
  PORT: string;
  HOST: string;
  PUBLIC_URL: string;
  DEMO: '0' | '1';
  NODE_ENV: string;
}

export interface Services {
  address: string;
  /** Resolves when the server says so; rejects with PlainFailure and the end of its log if it doesn't come up. */
  ready: Promise<void>;
  /** Ends both in order: no request or job in hand is cut off within 10 s. */
  stop: () => Promise<void>;
}

interface Service {
  name: string;
  script: string;
  logFile: string;
  child: ChildProcess | null;
  restarts: number;
}

const readyWithinMs = 60_000;
const endWithinMs = 12_000;
const longestPauseMs = 30_000;

/**
 * Starts the server and one worker as processes of their own and restarts one that dies, with growing pauses. logFolder gets their logs.
 */
export async function startServices(environment: ServiceEnvironment, logFolder: string): Promise<Services> {
  mkdirSync(logFolder, { recursive: true });
  const services = ['server', 'worker'].map((part): Service => ({
    name: part,
    script: part === 'server' ? 'server/main.ts' : 'server/worker.ts',
    logFile: join(logFolder, `${part}.log`),
    child: null,
    restarts: 0,
  }));
  const supervision = { isStopping: false, isReady: false };
  for (const service of services) rmSync(service.logFile, { force: true });
  for (const service of services) launch(service, environment, supervision, logFolder, services);
  const stop = async () => {
    supervision.isStopping = true;
    await Promise.all(services.map(({ child }) => endProcess(child)));
    rmSync(processFile(logFolder, process.pid), { force: true });
  };
  const address = `http://${environment.HOST.includes(':') ? `[${environment.HOST}]` : environment.HOST}:${environment.PORT}`;
  const ready = waitUntilReady(address, services[0]!).then(() => {
    supervision.isReady = true;
  });
  // Whoever stops before it is ready needs no answer.
  ready.catch(() => undefined);
  return { address, ready, stop };
}

function launch(
  service: Service,
  environment: ServiceEnvironment,
  supervision: { isStopping: boolean; isReady: boolean },
  logFolder: string,
  all: Service[],
): void {
  const log = openSync(service.logFile, 'a', 0o600);
  const startedAt = Date.now();
  // A group of its own: Ctrl-C in the terminal reaches this process only, which then ends them in order.
  const child = spawn(process.execPath, ['--import', 'tsx', service.script], {
    cwd: projectFolder,
    env: { ...process.env, ...environment },
    stdio: ['ignore', log, log],
    detached: true,
  });
  closeSync(log);
  service.child = child;
  writeProcessFile(logFolder, all);
  child.on('exit', (code, signal) => {
    service.child = null;
    const mayRestart = supervision.isReady || service.name === 'worker';
    if (supervision.isStopping || !mayRestart) return;
    if (Date.now() - startedAt > 60_000) service.restarts = 0;
    const pauseMs = Math.min(1000 * 2 ** service.restarts, longestPauseMs);
    service.restarts += 1;
    console.error(
      `The ${service.name} ended unexpectedly (${signal ?? `code ${code}`}); it starts again in ${pauseMs / 1000} s. Its log: ${service.logFile}`,
    );
    setTimeout(() => {
      if (!supervision.isStopping) launch(service, environment, supervision, logFolder, all);
    }, pauseMs);
  });
}

async function waitUntilReady(address: string, server: Service): Promise<void> {
  const readyUrl = `${address.replace('//0.0.0.0', '//127.0.0.1')}/health/ready`;
  const end = Date.now() + readyWithinMs;
  while (Date.now() < end) {
    if (server.child === null) throw new PlainFailure(`The server ended while it was starting:\n${readLogEnd(server)}`);
    if (await answersReady(readyUrl)) return;
    await sleep(100);
  }
  throw new PlainFailure(`The server wasn't ready within ${readyWithinMs / 1000} s:\n${readLogEnd(server)}`);
}

async function answersReady(url: string): Promise<boolean> {
  try {
    return (await fetch(url, { signal: AbortSignal.timeout(2_000) })).ok;
  } catch {
    return false;
  }
}

function readLogEnd({ logFile }: Service): string {
  return existsSync(logFile) ? readFileSync(logFile, 'utf8').trimEnd().split('\n').slice(-15).join('\n') : '(no log)';
}

function endProcess(child: ChildProcess | null): Promise<void> {
  if (!child || child.exitCode !== null || child.signalCode !== null) return Promise.resolve();
  return new Promise((resolve) => {
    const lastResort = setTimeout(() => child.kill('SIGKILL'), endWithinMs);
    child.once('exit', () => {
      clearTimeout(lastResort);
      resolve();
    });
    child.kill('SIGTERM');
  });
}

const processFile = (logFolder: string, parent: number) => join(logFolder, `processes-of-${parent}.json`);

function writeProcessFile(logFolder: string, services: Service[]): void {
  const pids = services.flatMap(({ child }) => child?.pid ?? []);
  writeFileSync(processFile(logFolder, process.pid), JSON.stringify(pids), { mode: 0o600 });
}

/** A command that was killed outright leaves its server and worker running; the next start ends them. */
export async function endOrphans(logFolder: string): Promise<void> {
  if (!existsSync(logFolder)) return;
  for (const file of readdirSync(logFolder)) {
    const parent = Number(/^processes-of-(\d+)\.json$/.exec(file)?.[1] ?? Number.NaN);
    if (Number.isNaN(parent) || isOurProcess(parent)) continue;
    const pids = JSON.parse(readFileSync(join(logFolder, file), 'utf8')) as number[];
    const orphans = pids.filter(isOurProcess);
    for (const pid of orphans) process.kill(pid, 'SIGTERM');
    for (let attempt = 0; attempt < 100 && orphans.some(isOurProcess); attempt += 1) await sleep(100);
    for (const pid of orphans.filter(isOurProcess)) process.kill(pid, 'SIGKILL');
    rmSync(join(logFolder, file), { force: true });
  }
}

/** The number may have passed to another program: only a process that runs a file of server/ counts. */
function isOurProcess(pid: number): boolean {
  try {
    process.kill(pid, 0);
  } catch {
    return false;
  }
  const commandFile = `/proc/${pid}/cmdline`;
  return existsSync(commandFile) && /server\/(main|worker|cli\/[a-z-]+)\.ts/.test(readFileSync(commandFile, 'utf8'));
}

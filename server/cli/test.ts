import { spawn } from 'node:child_process';
import { mkdirSync, readFileSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import { ensureCluster, type Cluster } from './cluster.ts';
import { prepareDataFolder, projectFolder } from './data-folder.ts';
import { ensureSystemPackages } from './debian-packages.ts';
import { PlainFailure, runCommand } from './plain-failure.ts';
import { readPlaywrightCounts, readVitestCounts, type Counts } from './test-counts.ts';

interface Suite {
  name: string;
  /** Program of node_modules/.bin and its arguments. */
  command: (filters: string[], reportFile: string) => string[];
  environment?: (reportFile: string) => Record<string, string>;
  /** How many passed and failed, by the report; a suite without a report counts as one test. */
  read?: (report: string) => Counts;
  needsDatabase?: boolean;
}

const folders = ['src', 'server', 'shared', 'tests', 'e2e', 'seed-data'];

const vitest = (projects: string[]) => (filters: string[], reportFile: string) => [
  ...['vitest', 'run', ...projects.flatMap((project) => ['--project', project])],
  ...['--reporter=default', '--reporter=json', `--outputFile.json=${reportFile}`, ...filters],
];

const suites: readonly Suite[] = [
  { name: 'format', command: () => ['prettier', '--check', '--log-level', 'warn', '.'] },
  { name: 'lint', command: () => ['eslint', '.', '--max-warnings', '0'] },
  { name: 'rules', command: () => ['depcruise', '--config', '.dependency-cruiser.cjs', ...folders] },
  { name: 'dead-code', command: () => ['knip', '--no-config-hints'] },
  { name: 'types', command: () => ['tsc', '--noEmit', '-p', 'tsconfig.json'] },
  { name: 'unit', command: vitest(['unit', 'unit-client']), read: readVitestCounts },
  { name: 'integration', command: vitest(['integration']), read: readVitestCounts, needsDatabase: true },
  {
    name: 'e2e',
    command: (filters) => ['playwright', 'test', '--reporter=list,json', ...filters],
    environment: (reportFile) => ({ PLAYWRIGHT_JSON_OUTPUT_FILE: reportFile }),
    read: readPlaywrightCounts,
    needsDatabase: true,
  },
];

const usage = `npm test [-- suites… [file filters…]]
  suites: ${suites.map(({ name }) => name).join(', ')} (all of them, in this order, if none is named)`;

interface Outcome extends Counts {
  name: string;
  seconds: number;
}

function chooseSuites(words: string[]): { chosen: readonly Suite[]; filters: string[] } {
  const names = new Set(suites.map(({ name }) => name));
  const chosen = suites.filter(({ name }) => words.includes(name));
  const filters = words.filter((word) => !names.has(word));
  if (chosen.length === 0 && words.length > 0) throw new PlainFailure(`No suite is called ${words[0]}.\n\n${usage}`);
  return { chosen: words.length === 0 ? suites : chosen, filters };
}

async function main(): Promise<number> {
  try {
    return await runSuites();
  } catch (error) {
    // Whoever reads the last line alone must see that nothing was shown.
    console.error(error instanceof PlainFailure ? `\n${error.message}` : error);
    console.log('\n0 passed, 1 failed');
    return 1;
  }
}

async function runSuites(): Promise<number> {
  const { chosen, filters } = chooseSuites(process.argv.slice(2));
  const needsDatabase = chosen.some((suite) => suite.needsDatabase);
  if (needsDatabase) ensureSystemPackages('test');
  const stopping = listenForStop();
  const outcomes: Outcome[] = [];
  let cluster: Cluster | undefined;
  try {
    if (needsDatabase) cluster = await ensureCluster('test');
    for (const suite of chosen) {
      if (!stopping.isAsked()) outcomes.push(await runSuite(suite, filters, stopping));
    }
  } finally {
    await cluster?.stop();
  }
  return summarise(outcomes, chosen.length);
}

async function runSuite(suite: Suite, filters: string[], stopping: Stopping): Promise<Outcome> {
  console.log(`\n── ${suite.name}`);
  const reportFolder = join(prepareDataFolder('test'), 'reports');
  mkdirSync(reportFolder, { recursive: true });
  const reportFile = join(reportFolder, `${suite.name}.json`);
  rmSync(reportFile, { force: true });
  const startedAt = performance.now();
  const code = await runProgram(suite.command(filters, reportFile), suite.environment?.(reportFile) ?? {}, stopping);
  const seconds = (performance.now() - startedAt) / 1000;
  return { name: suite.name, seconds, ...countSuite(suite, reportFile, code) };
}

/** A suite that ends badly without naming a failed test, or that ran nothing, counts as one failure. */
function countSuite(suite: Suite, reportFile: string, code: number): Counts {
  const counts = suite.read
    ? readReport(suite.read, reportFile)
    : { passed: code === 0 ? 1 : 0, failed: code === 0 ? 0 : 1 };
  const isUnexplained = counts.failed === 0 && (code !== 0 || counts.passed === 0);
  return isUnexplained ? { ...counts, failed: 1 } : counts;
}

function readReport(read: (report: string) => Counts, reportFile: string): Counts {
  try {
    return read(readFileSync(reportFile, 'utf8'));
  } catch (error) {
    console.error(`The suite left no readable report (${(error as Error).message}).`);
    return { passed: 0, failed: 0 };
  }
}

function runProgram(
  [program, ...args]: string[],
  environment: Record<string, string>,
  stopping: Stopping,
): Promise<number> {
  return new Promise((resolve) => {
    const child = spawn(join(projectFolder, 'node_modules', '.bin', program ?? ''), args, {
      cwd: projectFolder,
      stdio: ['ignore', 'inherit', 'inherit'],
      env: { ...process.env, ...environment },
    });
    stopping.onStop = () => child.kill('SIGTERM');
    child.on('error', (error) => {
      console.error(error.message);
      resolve(1);
    });
    child.on('close', (code) => resolve(code ?? 1));
  });
}

interface Stopping {
  isAsked: () => boolean;
  onStop: () => void;
}

function listenForStop(): Stopping {
  let isAsked = false;
  const stopping: Stopping = { isAsked: () => isAsked, onStop: () => undefined };
  for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP'] as const) {
    process.on(signal, () => {
      isAsked = true;
      stopping.onStop();
    });
  }
  return stopping;
}

function summarise(outcomes: Outcome[], wanted: number): number {
  console.log('\nsuite         passed  failed  seconds');
  for (const { name, passed, failed, seconds } of outcomes) {
    console.log(
      `${name.padEnd(12)}  ${String(passed).padStart(6)}  ${String(failed).padStart(6)}  ${seconds.toFixed(1).padStart(7)}`,
    );
  }
  if (outcomes.length < wanted)
    console.log(`Stopped before the end: ${wanted - outcomes.length} of ${wanted} suites did not run.`);
  const passed = outcomes.reduce((sum, outcome) => sum + outcome.passed, 0);
  const failed = outcomes.reduce((sum, outcome) => sum + outcome.failed, 0) + (outcomes.length < wanted ? 1 : 0);
  console.log(`\n${passed} passed, ${failed} failed`);
  return failed > 0 || passed === 0 ? 1 : 0;
}

await runCommand(main);

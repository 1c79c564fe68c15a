import { spawnSync } from 'node:child_process';
import { existsSync } from 'node:fs';
import { findPostgresBinaries } from './postgres-binaries.ts';
import { PlainFailure } from './plain-failure.ts';
import { chromiumPath, officePath, rscriptPath, systemPythonPath } from './system-programs.ts';

type Purpose = 'start' | 'test' | 'bench';

interface SystemPackage {
  /** Debian's name. */
  name: string;
  neededBy: Purpose;
  isPresent: () => boolean;
}

/** Everything that Fairweek, its tests or its bench need from the system beside Node: the only list of it. */
const systemPackages: readonly SystemPackage[] = [
  { name: 'postgresql', neededBy: 'start', isPresent: () => findPostgresBinaries() !== undefined },
  { name: 'chromium', neededBy: 'test', isPresent: () => existsSync(chromiumPath) },
  { name: 'libreoffice-calc-nogui', neededBy: 'test', isPresent: () => existsSync(officePath) },
  {
    name: 'python3-openpyxl',
    neededBy: 'test',
    isPresent: () => runsWell(systemPythonPath, ['-c', 'import openpyxl']),
  },
  { name: 'r-base-core', neededBy: 'bench', isPresent: () => existsSync(rscriptPath) },
  { name: 'unzip', neededBy: 'bench', isPresent: () => runsWell('unzip', ['-v']) },
];

function runsWell(program: string, args: string[]): boolean {
  return spawnSync(program, args, { stdio: 'ignore' }).status === 0;
}

function isRoot(): boolean {
  return process.getuid?.() === 0;
}

/**
 * Makes sure that what `purpose` needs from the system is there. As root on Debian the missing packages are installed, PostgreSQL
 * without a cluster of its own; anyone else is told the one command to run (throws PlainFailure).
 */
export function ensureSystemPackages(purpose: Purpose): void {
  const missing = systemPackages
    .filter(({ neededBy }) => neededBy === 'start' || neededBy === purpose)
    .filter(({ isPresent }) => !isPresent())
    .map(({ name }) => name);
  if (missing.length === 0) return;
  const script = installScript(missing);
  if (!isRoot() || !existsSync('/usr/bin/apt-get')) throw new PlainFailure(describeMissing(missing, script));
  console.log(`Installing Debian packages: ${missing.join(', ')} …`);
  const result = spawnSync('/bin/sh', ['-c', script], {
    stdio: ['ignore', 'ignore', 'inherit'],
    env: { ...process.env, DEBIAN_FRONTEND: 'noninteractive' },
  });
  const absent = systemPackages.filter(({ name, isPresent }) => missing.includes(name) && !isPresent());
  if (result.status !== 0 || absent.length > 0) {
    throw new PlainFailure(
      `Debian's packages could not be installed (${missing.join(', ')}). Run this by hand, see what it says, then start again:\n  ${script}`,
    );
  }
}

/** Debian's package would start a cluster of its own on port 5432 unless it is told not to beforehand. */
function installScript(packages: string[]): string {
  const install = `apt-get update -qq && apt-get install -y -qq --no-install-recommends ${packages.join(' ')}`;
  if (!packages.includes('postgresql')) return install;
  const settings = '/etc/postgresql-common/createcluster.conf';
  const withoutCluster = `mkdir -p /etc/postgresql-common && touch ${settings} && sed -i '/^ *create_main_cluster/d' ${settings} && echo 'create_main_cluster = false' >> ${settings}`;
  return `${withoutCluster} && ${install}`;
}

function describeMissing(packages: string[], script: string): string {
  const names = packages.join(', ');
  if (!existsSync('/usr/bin/apt-get')) {
    return `This system lacks what Debian calls ${names} (PostgreSQL must be 15 or later). Install it with your system's packages, then run the command again.`;
  }
  return `This system lacks Debian's ${names}. Have it installed with this one command, then run yours again:\n  sudo sh -c "${script}"`;
}

/**
 * First step of every command of the project: plain Node without packages, because it is what installs them.
 * usage: node server/cli/bootstrap.mjs <command> [options]; runs server/cli/<command>.ts and ends with its code.
 */
import { spawn, spawnSync } from 'node:child_process';
import { existsSync, readFileSync } from 'node:fs';
import { constants } from 'node:os';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';

const cliFolder = dirname(fileURLToPath(import.meta.url));
const projectFolder = dirname(dirname(cliFolder));
const [command, ...options] = process.argv.slice(2);

function refuse(sentence) {
  console.error(sentence);
  if (command === 'test') console.log('\n0 passed, 1 failed');
  process.exit(1);
}

function checkNode() {
  const [major, minor] = process.versions.node.split('.').map(Number);
  if (major < 20 || (major === 20 && minor < 19)) {
    refuse(
      `Fairweek needs Node 20.19 or a later 20; this is Node ${process.versions.node}. Install Node 20 (nodejs.org, or your system's packages) and run the command again.`,
    );
  }
  if (major > 20) {
    console.warn(
      `Fairweek is tried on Node 20; this is Node ${process.versions.node}. It may work, but nobody checked.`,
    );
  }
}

function readPackages(file) {
  return JSON.parse(readFileSync(file, 'utf8')).packages;
}

/** npm writes the list of what it really installed into node_modules as its last step; that list is compared with package-lock.json. */
function isInstalled() {
  const installedFile = join(projectFolder, 'node_modules', '.package-lock.json');
  if (!existsSync(installedFile)) return false;
  const wanted = readPackages(join(projectFolder, 'package-lock.json'));
  const installed = readPackages(installedFile);
  return Object.entries(wanted).every(
    ([path, entry]) => path === '' || entry.optional || entry.devOptional || installed[path]?.version === entry.version,
  );
}

function installPackages() {
  console.log('Installing npm packages as package-lock.json names them …');
  const result = spawnSync('npm', ['ci', '--include=dev', '--no-audit', '--no-fund', '--loglevel=error'], {
    cwd: projectFolder,
    stdio: 'inherit',
    shell: process.platform === 'win32',
  });
  if (result.status !== 0) {
    refuse(
      'npm could not install the packages (its message is above). Check the network and the folder’s rights, then run the command again.',
    );
  }
}

const commandFile = join(cliFolder, `${command}.ts`);
if (!command || !/^[a-z][a-z-]*$/.test(command) || !existsSync(commandFile)) {
  refuse(`There is no command “${command ?? ''}”. Try: npm start, npm test, npm run backtest, npm run bench.`);
}
checkNode();
if (!isInstalled()) installPackages();

const child = spawn(process.execPath, ['--import', 'tsx', commandFile, ...options], {
  cwd: projectFolder,
  stdio: 'inherit',
});
// A terminal's Ctrl-C reaches the child by itself (same process group); a signal sent to this process alone must be passed on.
const isTerminal = Boolean(process.stdin.isTTY);
for (const signal of ['SIGINT', 'SIGTERM', 'SIGHUP']) {
  process.on(signal, () => {
    if (!(signal === 'SIGINT' && isTerminal)) child.kill(signal);
  });
}
// npm that is killed outright takes its shell with it but not this process.
if (process.env.npm_lifecycle_event) {
  const parent = process.ppid;
  setInterval(() => {
    if (process.ppid !== parent) child.kill('SIGTERM');
  }, 500).unref();
}
child.on('error', (error) => refuse(`The command could not be started: ${error.message}`));
child.on('exit', (code, signal) => process.exit(signal ? 128 + (constants.signals[signal] ?? 0) : (code ?? 1)));

import { fork } from 'node:child_process';
import { dirname, join } from 'node:path';
import { fileURLToPath } from 'node:url';

export interface InstallationFacts {
  address: string;
  /** The demo people; none in an empty installation. */
  signIns: { email: string; password: string; role: string; name: string }[];
  /** Only in an empty installation: works once. */
  firstAdministratorLink: string | null;
  /** Superuser on its database, for looking behind the screens. */
  ownerUrl: string;
}

export interface RunningInstallation extends InstallationFacts {
  /** Ends server and worker and drops the database. */
  stop: () => Promise<void>;
}

/** Starts an installation of its own (database copy, server, worker) with or without the demo company. Rejects if it doesn't come up. */
export function startInstallation(kind: 'demo' | 'empty'): Promise<RunningInstallation> {
  const script = join(dirname(fileURLToPath(import.meta.url)), 'installation-process.ts');
  return new Promise((resolve, reject) => {
    const child = fork(script, [kind], {
      execArgv: ['--import', 'tsx'],
      stdio: ['ignore', 'inherit', 'inherit', 'ipc'],
    });
    const exited = new Promise<void>((done) => child.once('exit', () => done()));
    child.once('message', (facts) => {
      resolve({
        ...(facts as InstallationFacts),
        stop: () => {
          child.kill('SIGTERM');
          return exited;
        },
      });
    });
    child.once('error', reject);
    child.once('exit', (code) =>
      reject(new Error(`The installation ended with code ${code} before it was ready; see above.`)),
    );
  });
}

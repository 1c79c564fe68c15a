import { spawnSync } from 'node:child_process';
import { existsSync, readdirSync } from 'node:fs';
import { join } from 'node:path';

export interface PostgresBinaries {
  folder: string;
  major: number;
}

const oldestMajor = 15;

/** The newest PostgreSQL of at least 15 on this system whose server programs are all there; of exactly `major` if that is given. */
export function findPostgresBinaries(major?: number): PostgresBinaries | undefined {
  return candidateFolders()
    .filter((folder) => ['initdb', 'pg_ctl', 'postgres'].every((program) => existsSync(join(folder, program))))
    .map((folder) => ({ folder, major: readMajor(folder) }))
    .filter((found) => found.major >= oldestMajor && (major === undefined || found.major === major))
    .sort((a, b) => b.major - a.major)[0];
}

function candidateFolders(): string[] {
  const fromPath = (process.env.PATH ?? '').split(':').filter((folder) => folder !== '');
  return [
    ...subfolders('/usr/lib/postgresql', 'bin'),
    ...subfolders('/usr', 'bin').filter((folder) => folder.includes('/pgsql-')),
    ...subfolders('/opt/homebrew/opt', 'bin').filter((folder) => folder.includes('/postgresql')),
    ...fromPath,
  ];
}

function subfolders(parent: string, inner: string): string[] {
  if (!existsSync(parent)) return [];
  return readdirSync(parent).map((name) => join(parent, name, inner));
}

function readMajor(folder: string): number {
  const answer = spawnSync(join(folder, 'postgres'), ['--version'], { encoding: 'utf8' });
  return Number(/\(PostgreSQL\) (\d+)/.exec(answer.stdout)?.[1] ?? 0);
}

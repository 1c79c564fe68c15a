import { createHash } from 'node:crypto';
import { existsSync, readdirSync, readFileSync, renameSync, rmSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { build } from 'vite';
import { projectFolder } from './data-folder.ts';
import { PlainFailure } from './plain-failure.ts';

const sources = ['src', 'shared', 'public', 'index.html', 'vite.config.ts', 'tailwind.config.ts', 'package-lock.json'];
const stampName = '.sources';

/**
 * Builds the browser's part into dist/ if its sources changed since the last build. The new build is made beside and then changes places with
 * the old one, so that a running server never serves half of it. Returns whether it built.
 */
export async function buildClientIfChanged(): Promise<boolean> {
  const target = join(projectFolder, 'dist');
  const fingerprint = fingerprintSources();
  const stampFile = join(target, stampName);
  if (existsSync(stampFile) && readFileSync(stampFile, 'utf8') === fingerprint) return false;
  const unfinished = `${target}.${process.pid}`;
  try {
    await build({ root: projectFolder, logLevel: 'warn', build: { outDir: unfinished, emptyOutDir: true } });
    writeFileSync(join(unfinished, stampName), fingerprint);
    rmSync(target, { recursive: true, force: true });
    renameSync(unfinished, target);
  } catch (cause) {
    throw new PlainFailure(`The browser's part could not be built: ${(cause as Error).message}`);
  } finally {
    rmSync(unfinished, { recursive: true, force: true });
  }
  return true;
}

function fingerprintSources(): string {
  const hash = createHash('sha256');
  for (const file of sources.flatMap(listFiles).sort()) {
    hash
      .update(file)
      .update('\0')
      .update(readFileSync(join(projectFolder, file)))
      .update('\0');
  }
  return hash.digest('hex');
}

function listFiles(source: string): string[] {
  const path = join(projectFolder, source);
  if (!existsSync(path)) return [];
  if (source.includes('.')) return [source];
  return readdirSync(path, { recursive: true, withFileTypes: true })
    .filter((entry) => entry.isFile())
    .map((entry) => join(entry.parentPath, entry.name).slice(projectFolder.length + 1));
}

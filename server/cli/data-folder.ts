import { randomBytes, createHash } from 'node:crypto';
import { spawnSync } from 'node:child_process';
import { existsSync, mkdirSync, readFileSync, realpathSync, renameSync, writeFileSync } from 'node:fs';
import { dirname, join } from 'node:path';
import { z } from 'zod';
import { PlainFailure } from './plain-failure.ts';

/** The folder that holds the checkout: two above this file's. */
export const projectFolder = dirname(dirname(import.meta.dirname));

/** Each has a cluster of its own, so that they run beside one another. */
export type ClusterPurpose = 'start' | 'test' | 'bench';

export const databaseRoles = ['owner', 'fairweek_migrator', 'fairweek_application', 'fairweek_reader'] as const;
export type DatabaseRole = (typeof databaseRoles)[number];

const SignIn = z.object({ email: z.string(), password: z.string(), role: z.string(), name: z.string() });
export type SignIn = z.infer<typeof SignIn>;

const Installation = z.object({
  port: z.number().int().nullable(),
  rolePasswords: z.record(z.enum(databaseRoles), z.string().min(20)),
  /** The database that the last start used; the next one goes on with it. */
  lastDatabase: z.string().nullable().default(null),
  /** The demo people by database; their passwords are printed at every start. */
  demoSignIns: z.record(z.string(), z.array(SignIn)),
});
/** What one installation keeps to itself: its database's port, the roles' passwords, the demo people's sign-ins. */
export type Installation = z.infer<typeof Installation>;

/** As root the cluster runs as `postgres`, because PostgreSQL refuses root. */
export function needsPostgresUser(): boolean {
  return process.getuid?.() === 0;
}

/**
 * Where a cluster and its secrets live: `.data` (or `.data/<purpose>`) of the checkout; if PostgreSQL's own user can't walk there,
 * /var/lib/fairweek/<checkout id>. Created if missing.
 */
export function prepareDataFolder(purpose: ClusterPurpose): string {
  const inner = purpose === 'start' ? '' : purpose;
  const folder = canPostgresUserReach(projectFolder)
    ? join(projectFolder, '.data', inner)
    : join('/var/lib/fairweek', checkoutId(), inner);
  try {
    mkdirSync(folder, { recursive: true });
  } catch (cause) {
    throw new PlainFailure(
      `The folder ${folder} can't be made (${(cause as Error).message}). Give yourself the right to write there, or clone into a folder of your own.`,
    );
  }
  return folder;
}

function canPostgresUserReach(folder: string): boolean {
  if (!needsPostgresUser()) return true;
  return spawnSync('runuser', ['-u', 'postgres', '--', 'test', '-x', folder], { cwd: '/' }).status === 0;
}

function checkoutId(): string {
  return createHash('sha256').update(realpathSync(projectFolder)).digest('hex').slice(0, 12);
}

const installationFile = (folder: string) => join(folder, 'installation.json');

/** Reads the installation's secrets; draws and keeps them (rights 0600) the first time. */
export function loadInstallation(folder: string): Installation {
  const file = installationFile(folder);
  if (existsSync(file)) return readInstallation(file);
  if (existsSync(join(folder, 'cluster', 'db'))) {
    throw new PlainFailure(
      `${file} is missing, and with it the passwords of the database beside it. Put it back from a backup; or, if the data may go, delete ${folder}.`,
    );
  }
  const drawn: Installation = {
    port: null,
    rolePasswords: Object.fromEntries(
      databaseRoles.map((role) => [role, drawSecret()]),
    ) as Installation['rolePasswords'],
    lastDatabase: null,
    demoSignIns: {},
  };
  saveInstallation(folder, drawn);
  return drawn;
}

function readInstallation(file: string): Installation {
  let text: string;
  try {
    text = readFileSync(file, 'utf8');
  } catch (cause) {
    throw new PlainFailure(
      `${file} can't be read (${(cause as Error).message}). It belongs to whoever started Fairweek here first: run the command as that user.`,
    );
  }
  const parsed = Installation.safeParse(JSON.parse(text));
  if (!parsed.success)
    throw new PlainFailure(`${file} is damaged: ${parsed.error.message}. Put it back from a backup.`);
  return parsed.data;
}

/** Written beside and renamed, so that a cut-off write never leaves half a file. */
export function saveInstallation(folder: string, installation: Installation): void {
  const file = installationFile(folder);
  writeFileSync(`${file}.new`, `${JSON.stringify(installation, null, 2)}\n`, { mode: 0o600 });
  renameSync(`${file}.new`, file);
}

function drawSecret(): string {
  return randomBytes(24).toString('base64url');
}

import { statSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { ensureCluster, withClient, type Cluster } from '../../../server/cli/cluster.ts';
import { createTestDatabase, type TestDatabase } from '../../setup/database.ts';

let database: TestDatabase;
let cluster: Cluster;

beforeAll(async () => {
  cluster = await ensureCluster('test');
  database = await createTestDatabase();
});

afterAll(() => database.drop());

async function readSetting(name: string): Promise<string> {
  return withClient(database.ownerUrl, async (client) => {
    const { rows } = await client.query<{ value: string }>('SELECT current_setting($1) AS value', [name]);
    return rows[0]?.value ?? '';
  });
}

describe('the checkout’s own cluster', () => {
  it('is taken over when it runs already', () => {
    expect(cluster.wasRunning).toBe(true);
  });

  it.each([
    ['listen_addresses', '127.0.0.1'],
    ['unix_socket_directories', ''],
    ['data_checksums', 'on'],
    ['password_encryption', 'scram-sha-256'],
    ['server_encoding', 'UTF8'],
  ])('runs with %s = %s', async (name, value) => {
    expect(await readSetting(name)).toBe(value);
  });

  it('keeps its passwords from other users of the machine', () => {
    expect(statSync(join(cluster.dataFolder, 'installation.json')).mode & 0o777).toBe(0o600);
  });

  it('refuses a wrong password', async () => {
    const url = new URL(database.applicationUrl);
    url.password = 'not-the-password';
    await expect(withClient(url.href, (client) => client.query('SELECT 1'))).rejects.toMatchObject({ code: '28P01' });
  });

  it('asks every connection for a password', async () => {
    const methods = await withClient(database.ownerUrl, async (client) => {
      const { rows } = await client.query<{ auth_method: string }>(
        'SELECT DISTINCT auth_method FROM pg_hba_file_rules',
      );
      return rows.map((row) => row.auth_method);
    });
    expect(methods).toEqual(['scram-sha-256']);
  });
});

describe('the database roles', () => {
  it('give only the owner power over the cluster', async () => {
    const { rows } = await withClient(database.ownerUrl, (client) =>
      client.query(
        `SELECT rolname, rolsuper, rolcreatedb, rolcreaterole, rolreplication, rolbypassrls FROM pg_roles
          WHERE rolname LIKE 'fairweek%' ORDER BY rolname`,
      ),
    );
    const powerless = {
      rolsuper: false,
      rolcreatedb: false,
      rolcreaterole: false,
      rolreplication: false,
      rolbypassrls: false,
    };
    expect(rows).toEqual(
      ['fairweek_application', 'fairweek_migrator', 'fairweek_reader'].map((rolname) => ({ rolname, ...powerless })),
    );
  });

  it.each([
    ['application', 'CREATE TABLE public.intruder (a int)'],
    ['application', 'CREATE SCHEMA intruder'],
    ['application', 'TRUNCATE applied_migration'],
    ['reader', 'CREATE TABLE public.intruder (a int)'],
    ['reader', 'CREATE TEMPORARY TABLE intruder (a int)'],
    ['reader', `INSERT INTO applied_migration (name) VALUES ('x')`],
  ] as const)('refuse the %s “%s”', async (role, statement) => {
    const url = role === 'reader' ? database.readerUrl : database.applicationUrl;
    await expect(withClient(url, (client) => client.query(statement))).rejects.toMatchObject({ code: '42501' });
  });

  it('let the migrator own the database', async () => {
    const { rows } = await withClient(database.ownerUrl, (client) =>
      client.query(`SELECT pg_get_userbyid(datdba) AS owner FROM pg_database WHERE datname = current_database()`),
    );
    expect(rows).toEqual([{ owner: 'fairweek_migrator' }]);
  });

  it('keep a database of one test from the other’s roles without a grant', async () => {
    const { rows } = await withClient(database.ownerUrl, (client) =>
      client.query(`SELECT has_database_privilege('public', current_database(), 'CONNECT') AS can`),
    );
    expect(rows).toEqual([{ can: false }]);
  });
});

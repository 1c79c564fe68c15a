import { randomBytes } from 'node:crypto';
import { createDatabase, databaseUrl, withClient } from '../../server/cli/cluster.ts';
import type { TestCluster } from './template-database.ts';

export interface TestDatabase {
  name: string;
  /** As the server connects. */
  applicationUrl: string;
  /** As migrations and jobs' own schema connect. */
  migratorUrl: string;
  /** Superuser: for looking behind the rules, and for laying damage. */
  ownerUrl: string;
  readerUrl: string;
  /** Cuts off whoever is still connected. */
  drop: () => Promise<void>;
}

/** A fresh copy of a template database; by default of the migrated one, empty of rows but for what migrations lay down. */
export async function cloneDatabase(cluster: TestCluster, template = cluster.template): Promise<TestDatabase> {
  const name = `test_${process.pid}_${randomBytes(5).toString('hex')}`;
  await createDatabase(cluster, name, template);
  return {
    name,
    applicationUrl: databaseUrl(cluster, 'fairweek_application', name),
    migratorUrl: databaseUrl(cluster, 'fairweek_migrator', name),
    ownerUrl: databaseUrl(cluster, 'owner', name),
    readerUrl: databaseUrl(cluster, 'fairweek_reader', name),
    drop: async () => {
      await withClient(databaseUrl(cluster, 'owner', 'postgres'), (client) =>
        client.query(`DROP DATABASE IF EXISTS ${name} WITH (FORCE)`),
      );
    },
  };
}

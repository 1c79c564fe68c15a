import { z } from 'zod';
import { databaseUrl, withClient } from '../../server/cli/cluster.ts';
import { readEnv } from '../../server/lib/env.ts';
import { loadDemo } from '../../seed-data/load-demo.ts';
import { cloneDatabase } from './clone-database.ts';
import { fingerprintSources, type TestCluster } from './template-database.ts';

const SignIns = z.array(z.object({ email: z.string(), password: z.string(), role: z.string(), name: z.string() }));

export interface DemoTemplate {
  template: string;
  signIns: z.infer<typeof SignIns>;
}

const demoLock = 4_310_002;

/**
 * A database with the demo company loaded, to be copied: loading takes a minute, copying a moment. Made anew when anything changed that loading
 * runs through. The demo people's passwords stand in the database's comment, which lives as long as it does.
 */
export async function prepareDemoTemplate(cluster: TestCluster): Promise<DemoTemplate> {
  const template = `demo_${fingerprintSources(['server', 'shared', 'seed-data'])}`;
  return withClient(databaseUrl(cluster, 'owner', 'postgres'), async (client) => {
    await client.query('SELECT pg_advisory_lock($1)', [demoLock]);
    const { rows } = await client.query<{ comment: string }>(
      `SELECT shobj_description(oid, 'pg_database') AS comment FROM pg_database WHERE datname = $1`,
      [template],
    );
    if (rows[0]) return { template, signIns: SignIns.parse(JSON.parse(rows[0].comment)) };
    const database = await cloneDatabase(cluster);
    const { signIns } = await loadDemo({ env: readEnv({ DATABASE_URL: database.applicationUrl, DEMO: '1' }) });
    await client.query(`ALTER DATABASE ${database.name} ALLOW_CONNECTIONS false`);
    // A connection that is just closing would still hold the name.
    await client.query('SELECT pg_terminate_backend(pid) FROM pg_stat_activity WHERE datname = $1', [database.name]);
    await client.query(`COMMENT ON DATABASE ${database.name} IS ${client.escapeLiteral(JSON.stringify(signIns))}`);
    await client.query(`ALTER DATABASE ${database.name} RENAME TO ${template}`);
    return { template, signIns };
  });
}

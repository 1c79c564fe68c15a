import { spawn } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { listReasons } from '../../features/settings/settings.service.ts';
import { saveOverrides } from '../../features/plan/overrides.service.ts';
import type { Database } from '../../lib/database.ts';
import type { Actor } from '../../lib/authorise.ts';
import { databaseUrl } from '../cluster.ts';
import { PlainFailure } from '../plain-failure.ts';
import { findPostgresBinaries } from '../postgres-binaries.ts';
import { withBenchDatabase } from './bench-database.ts';
import { seam } from './invented-range.ts';
import { takeTurns, writeDuration, type BenchRow } from './measure.ts';
import { storePlan } from './stored-plan.ts';

const clients = 10;
const savesPerClient = 20;

/** The writes of one save without its rules: next version, one override, the changed series; each client on a line of its own. */
function writeStatement(firstLine: number, actorId: number): string {
  const line = `(${firstLine} + :client_id)`;
  return [
    'with head as (',
    `  select number, run_id from plan_version where line_id = ${line} order by number desc limit 1`,
    '), target as (',
    `  select line_id, item_id, location_id, first_week from plan_series where line_id = ${line} order by item_id limit 1`,
    '), written as (',
    '  insert into plan_version (line_id, number, parent, run_id, kind, author_id, changed_cells, changed_units)',
    `  select ${line}, number + 1, number, run_id, 'overrides', ${actorId}, 1, 1 from head returning id`,
    '), made as (',
    '  insert into override (version_id, line_id, sequence, item_id, location_id, first_week, last_week, operation, value, base_model)',
    `  select written.id, t.line_id, coalesce((select max(sequence) from override where line_id = ${line}), 0) + 1, t.item_id, t.location_id, t.first_week,`,
    `    t.first_week, 'add', 1, '{1}' from written, target t`,
    ')',
    'update plan_series p set plan[1] = p.plan[1] + 1 from target t',
    'where p.line_id = t.line_id and p.item_id = t.item_id and p.location_id = t.location_id;',
  ].join(' ');
}

function runPgbench(url: string, script: string): Promise<number> {
  const program = join(findPostgresBinaries()?.folder ?? '', 'pgbench');
  return new Promise((resolve, reject) => {
    const args = ['-n', '-c', String(clients), '-j', '1', '-t', String(5 * savesPerClient), '-f', script, url];
    const child = spawn(program, args, { stdio: ['ignore', 'pipe', 'pipe'] });
    let said = '';
    child.stdout.on('data', (chunk: Buffer) => (said += chunk.toString()));
    child.stderr.on('data', (chunk: Buffer) => (said += chunk.toString()));
    child.on('error', reject);
    child.on('close', (code) => {
      const rate = /^tps = ([\d.]+)/m.exec(said);
      if (code === 0 && rate) resolve(Number(rate[1]));
      else reject(new PlainFailure(`pgbench ended with code ${code}:\n${said}`));
    });
  });
}

/** One person's saves on one line, each on top of the version before; returns their lengths in milliseconds. */
async function saveAgain(
  database: Database,
  actor: Actor,
  plan: { lineId: number; itemId: number },
  reasonId: number,
): Promise<number[]> {
  const lengths: number[] = [];
  const { rows } = await database.pool.query<{ number: number }>(
    'select max(number) as number from plan_version where line_id = $1',
    [plan.lineId],
  );
  let baseVersion = rows[0]?.number ?? 0;
  for (let save = 0; save < savesPerClient; save += 1) {
    const startedAt = performance.now();
    const saved = await saveOverrides(database, actor, plan.lineId, {
      baseVersion,
      overrides: [
        {
          scope: { itemId: plan.itemId, locationId: null },
          firstWeek: seam,
          lastWeek: seam,
          operation: 'add',
          value: 1,
          reasonId,
          note: 'Bench',
        },
      ],
    });
    lengths.push(performance.now() - startedAt);
    baseVersion = saved.version.number;
  }
  return lengths;
}

export const saveCells: BenchRow = {
  name: 'save-cells',
  run: () =>
    withBenchDatabase(async (given) => {
      const { database, actor, cluster, name } = given;
      const plans = await storePlan(given, { lines: clients, items: 12, weeks: 13 });
      const reasonId = (await listReasons(database)).reasons[0]!.id;
      const folder = mkdtempSync(join(tmpdir(), 'fairweek-bench-'));
      try {
        const script = join(folder, 'save.sql');
        const lineIds = plans.map(({ lineId }) => lineId);
        if (Math.max(...lineIds) - Math.min(...lineIds) !== clients - 1) throw new Error('the lines’ ids have gaps');
        writeFileSync(script, `${writeStatement(Math.min(...lineIds), actor.id)}\n`);
        const lengths: number[] = [];
        const url = databaseUrl(cluster, 'fairweek_application', name);
        const { ours, peer } = await takeTurns(
          {
            ours: async () => {
              const startedAt = performance.now();
              const saved = await Promise.all(plans.map((plan) => saveAgain(database, actor, plan, reasonId)));
              lengths.push(...saved.flat());
              return (performance.now() - startedAt) / (clients * savesPerClient);
            },
            peer: async () => 1000 / (await runPgbench(url, script)),
          },
          5,
        );
        lengths.sort((a, b) => a - b);
        const slowest = lengths[Math.ceil(0.99 * lengths.length) - 1]!;
        const row = 'save-cells';
        const took = `${Math.round(1000 / ours)}/s`;
        return [
          {
            row,
            work: `override saves with all their rules, ${clients} clients`,
            ours: took,
            beside: `pgbench, the writes alone ${Math.round(1000 / peer)}/s`,
            value: peer / ours,
            unit: '× rate',
            must: { atLeast: 0.25 },
            goal: { atLeast: 0.4 },
          },
          {
            row,
            work: 'the same, 99th of 100 saves',
            ours: writeDuration(slowest),
            beside: '–',
            value: slowest,
            unit: 'ms',
            must: { atMost: 60 },
            goal: { atMost: 30 },
          },
        ];
      } finally {
        rmSync(folder, { recursive: true, force: true });
      }
    }),
};

import type { OverrideOperation, OverrideScope } from '../../../shared/contracts/plan.ts';
import { execute, selectRow, type Tx } from '../../lib/database.ts';

export interface PlanRow {
  itemId: number;
  locationId: number;
  plan: readonly number[];
}

export interface NewVersion {
  lineId: number;
  number: number;
  parent: number | null;
  runId: number;
  kind: 'forecast' | 'overrides' | 'adjustment';
  authorId: number;
  reason: string | null;
  note: string | null;
  heldWeeks: readonly string[];
  changedCells: number;
  changedUnits: number;
}

export interface NewStoredOverride {
  sequence: number;
  scope: OverrideScope;
  firstWeek: string;
  lastWeek: string;
  operation: OverrideOperation;
  value: number | null;
  clears: readonly number[] | null;
  reasonId: number | null;
  note: string | null;
  baseModel: readonly number[];
}

/** A snapshot is kept of every version whose number this divides. */
export const snapshotEvery = 50;

const versionColumns = `"lineId" int, number int, parent int, "runId" int, kind text, "authorId" int, reason text, note text, "heldWeeks" date[],
  "changedCells" int, "changedUnits" float8`;
const insertVersions = `insert into plan_version (line_id, number, parent, run_id, kind, author_id, reason, note, held_weeks, changed_cells, changed_units)
  select "lineId", number, parent, "runId", kind, "authorId", reason, note, "heldWeeks", "changedCells", "changedUnits"`;

/**
 * Writes a version with its overrides, the changed rows of the newest state and, where due, the snapshot, in one statement.
 * `changed`: whole rows of the series that changed. `snapshot`: all series, or null.
 */
export async function insertVersion(
  tx: Tx,
  version: NewVersion,
  written: {
    firstWeek: string;
    overrides: readonly NewStoredOverride[];
    changed: readonly PlanRow[];
    snapshot: readonly PlanRow[] | null;
  },
): Promise<{ id: number; at: string; overrideIds: { id: number; sequence: number }[] }> {
  const row = await selectRow<{ id: number; at: string; overrideIds: { id: number; sequence: number }[] | null }>(
    tx,
    `with version as (
       ${insertVersions} from jsonb_to_record($version::jsonb) as v(${versionColumns})
       returning id, line_id, at
     ), overridden as (
       insert into override (version_id, line_id, sequence, item_id, location_id, first_week, last_week, operation, value, clears, reason_id, note, base_model)
       select v.id, v.line_id, o.sequence, (o.scope->>'itemId')::int, (o.scope->>'locationId')::int, o."firstWeek", o."lastWeek", o.operation, o.value, o.clears,
              o."reasonId", o.note, o."baseModel"
       from version v, jsonb_to_recordset($overrides::jsonb) as o(sequence int, scope jsonb, "firstWeek" date, "lastWeek" date, operation text, value float8,
              clears int[], "reasonId" int, note text, "baseModel" float8[])
       returning id, sequence
     ), planned as (
       insert into plan_series (line_id, item_id, location_id, first_week, plan)
       select v.line_id, p."itemId", p."locationId", $firstWeek::date, p.plan
       from version v, jsonb_to_recordset($changed::jsonb) as p("itemId" int, "locationId" int, plan float8[])
       on conflict (line_id, item_id, location_id) do update set first_week = excluded.first_week, plan = excluded.plan
     ), kept as (
       insert into plan_snapshot (version_id, item_id, location_id, first_week, plan)
       select v.id, p."itemId", p."locationId", $firstWeek::date, p.plan
       from version v, jsonb_to_recordset($snapshot::jsonb) as p("itemId" int, "locationId" int, plan float8[])
     )
     select v.id, to_json(v.at) as at, (select json_agg(json_build_object('id', id, 'sequence', sequence)) from overridden) as "overrideIds"
     from version v`,
    {
      version: JSON.stringify(version),
      overrides: JSON.stringify(written.overrides),
      changed: JSON.stringify(written.changed),
      snapshot: JSON.stringify(written.snapshot ?? []),
      firstWeek: written.firstWeek,
    },
  );
  if (!row) throw new Error('version was not stored');
  return { id: row.id, at: new Date(row.at).toISOString(), overrideIds: row.overrideIds ?? [] };
}

/** Writes the lines' forecast versions and replaces their newest state; snapshots where the number asks for one. */
export async function insertForecastVersions(
  tx: Tx,
  versions: readonly NewVersion[],
  firstWeek: string,
  plans: readonly (PlanRow & { lineId: number })[],
): Promise<void> {
  const lineIds = versions.map(({ lineId }) => lineId);
  await execute(tx, 'delete from plan_series where line_id = any($lineIds::int[])', { lineIds });
  await execute(
    tx,
    `with version as (
       ${insertVersions} from jsonb_to_recordset($versions::jsonb) as v(${versionColumns})
       returning id, line_id, number
     ), plan as materialized (
       select * from jsonb_to_recordset($plans::jsonb) as p("lineId" int, "itemId" int, "locationId" int, plan float8[])
     ), planned as (
       insert into plan_series (line_id, item_id, location_id, first_week, plan)
       select "lineId", "itemId", "locationId", $firstWeek::date, plan from plan
     )
     insert into plan_snapshot (version_id, item_id, location_id, first_week, plan)
     select v.id, p."itemId", p."locationId", $firstWeek::date, p.plan
     from version v join plan p on p."lineId" = v.line_id where v.number % $snapshotEvery::int = 0`,
    { versions: JSON.stringify(versions), plans: JSON.stringify(plans), firstWeek, snapshotEvery },
  );
}

export async function insertRun(
  tx: Tx,
  run: {
    categoryId: number;
    jobId: number | null;
    salesRevision: number | null;
    calendarRevision: number | null;
    salesTo: string;
    firstWeek: string;
    weeks: number;
    actorId: number;
  },
): Promise<number> {
  const row = await selectRow<{ id: number }>(
    tx,
    `insert into forecast_run (category_id, job_id, sales_revision_id, calendar_revision_id, sales_to, first_week, weeks, actor_id)
     values ($categoryId, $jobId, $salesRevision, $calendarRevision, $salesTo, $firstWeek, $weeks, $actorId) returning id`,
    run,
  );
  if (!row) throw new Error('run was not stored');
  return row.id;
}

export interface NewRunSeries {
  itemId: number;
  locationId: number;
  unitStep: number;
  method: string;
  model: readonly number[];
  mean: readonly number[];
  base: readonly number[];
  p2_5: readonly number[];
  p10: readonly number[];
  p50: readonly number[];
  p90: readonly number[];
  p97_5: readonly number[];
  /** null = unknown. */
  price: readonly (number | null)[];
  marks: Readonly<Record<string, readonly string[]>>;
  parts: Readonly<Record<string, readonly number[]>>;
}

export interface NewRunTotal {
  scope: 'line' | 'item' | 'location';
  itemId: number | null;
  locationId: number | null;
  mean: readonly number[];
  p2_5: readonly number[];
  p10: readonly number[];
  p50: readonly number[];
  p90: readonly number[];
  p97_5: readonly number[];
}

export interface NewFit {
  specification: Readonly<Record<string, unknown>>;
  coefficients: readonly unknown[];
  factorR: readonly number[];
  scores: readonly unknown[];
  /** rows, rank, sigma, rSquared, aic, seconds. */
  summary: Readonly<Record<string, number>>;
  findings: readonly unknown[];
  /** null where nothing was fitted. */
  diagnosis: unknown;
}

/** Writes what a run says of one line: its fit (null where nothing was fitted), series and totals. */
export async function insertLineRun(
  tx: Tx,
  head: {
    runId: number;
    lineId: number;
    firstWeek: string;
    salesRevision: number | null;
    calendarRevision: number | null;
  },
  line: { fit: NewFit; series: readonly NewRunSeries[]; totals: readonly NewRunTotal[] },
): Promise<void> {
  await execute(
    tx,
    `with kept_fit as (
       insert into fit (run_id, line_id, sales_revision_id, calendar_revision_id, specification, coefficients, factor_r, scores, summary, findings, diagnosis)
       select $runId, $lineId, $salesRevision, $calendarRevision, f.specification, f.coefficients, f."factorR", f.scores, f.summary, f.findings,
              f.diagnosis
       from jsonb_to_record($fit::jsonb) as f(specification jsonb, coefficients jsonb, "factorR" float8[], scores jsonb, summary jsonb, findings jsonb,
              diagnosis jsonb)
     ), kept_series as (
       insert into run_series (run_id, line_id, item_id, location_id, first_week, unit_step, method, model, mean, base, p2_5, p10, p50, p90, p97_5, price, marks, parts)
       select $runId, $lineId, s."itemId", s."locationId", $firstWeek::date, s."unitStep", s.method, s.model, s.mean, s.base, s.p2_5, s.p10, s.p50, s.p90,
              s.p97_5, (select array_agg(coalesce(x, 'NaN') order by n) from unnest(s.price) with ordinality as u(x, n)), s.marks, s.parts
       from jsonb_to_recordset($series::jsonb) as s("itemId" int, "locationId" int, "unitStep" float8, method text, model float8[], mean float8[], base float8[],
              p2_5 float8[], p10 float8[], p50 float8[], p90 float8[], p97_5 float8[], price float8[], marks jsonb, parts jsonb)
     )
     insert into run_total (run_id, line_id, scope, item_id, location_id, first_week, mean, p2_5, p10, p50, p90, p97_5)
     select $runId, $lineId, t.scope, t."itemId", t."locationId", $firstWeek::date, t.mean, t.p2_5, t.p10, t.p50, t.p90, t.p97_5
     from jsonb_to_recordset($totals::jsonb) as t(scope text, "itemId" int, "locationId" int, mean float8[], p2_5 float8[], p10 float8[], p50 float8[],
            p90 float8[], p97_5 float8[])`,
    {
      ...head,
      fit: JSON.stringify(line.fit),
      series: JSON.stringify(line.series),
      totals: JSON.stringify(line.totals),
    },
  );
}

export async function insertHandOvers(
  tx: Tx,
  handOvers: readonly {
    lineId: number;
    roundId: number;
    state: 'submitted' | 'returned' | 'lapsed';
    version: number;
    actorId: number;
    comment: string | null;
  }[],
): Promise<void> {
  if (handOvers.length === 0) return;
  await execute(
    tx,
    `insert into hand_over (line_id, round_id, state, version, actor_id, comment)
     select h."lineId", h."roundId", h.state, h.version, h."actorId", h.comment
     from jsonb_to_recordset($handOvers::jsonb) as h("lineId" int, "roundId" int, state text, version int, "actorId" int, comment text)`,
    { handOvers: JSON.stringify(handOvers) },
  );
}

export async function insertLockEvents(
  tx: Tx,
  event: { lineId: number; locked: boolean; version: number; actorId: number; reason: string | null },
  ranges: readonly { firstWeek: string; lastWeek: string }[],
): Promise<void> {
  await execute(
    tx,
    `insert into lock_event (line_id, first_week, last_week, locked, version, actor_id, at, reason)
     select $lineId, r."firstWeek", r."lastWeek", $locked, $version, $actorId, now_once.at, $reason
     from (select clock_timestamp() as at) now_once, jsonb_to_recordset($ranges::jsonb) as r("firstWeek" date, "lastWeek" date)`,
    { ...event, ranges: JSON.stringify(ranges) },
  );
}

/** One mail for each recipient, sent after the transaction by whoever empties the outbox. */
export async function insertMails(
  tx: Tx,
  mail: { kind: string; recipientIds: readonly number[]; payload: Record<string, unknown> },
): Promise<void> {
  if (mail.recipientIds.length === 0) return;
  await execute(
    tx,
    `insert into mail_outbox (recipient_id, kind, payload) select unnest($recipientIds::int[]), $kind, $payload::jsonb`,
    { kind: mail.kind, recipientIds: mail.recipientIds, payload: JSON.stringify(mail.payload) },
  );
}

import type { Round, VersionSummary } from '../../../shared/contracts/plan.ts';
import type { Finding } from '../../../shared/contracts/lines.ts';
import type { Named } from '../../../shared/contracts/primitives.ts';
import type { ReplayedOverride } from '../../../shared/domain/override-arithmetic.ts';
import { selectRow, selectRows, type Tx } from '../../lib/database.ts';
import type { LineHead, LockedWeek, RunHead } from './line-state.ts';

/**
 * Takes the line's row, so that saves, hand-overs, locks and forecasts of a line come one after another; not its key, which imports refer to meanwhile.
 * False if it is out of scope.
 */
export async function lockLine(tx: Tx, lineId: number, categories: number[] | null): Promise<boolean> {
  const row = await selectRow(
    tx,
    `select id from product_line where id = $lineId and ($categories::int[] is null or category_id = any($categories::int[])) for no key update`,
    { lineId, categories },
  );
  return row !== null;
}

/** Takes all rows of a category's lines, in the order of their ids. */
export async function lockLinesOfCategory(tx: Tx, categoryId: number): Promise<number[]> {
  const rows = await selectRows<{ id: number }>(
    tx,
    'select id from product_line where category_id = $categoryId order by id for no key update',
    { categoryId },
  );
  return rows.map(({ id }) => id);
}

const versionJson = (version: string): string => `json_build_object(
  'number', ${version}.number, 'parent', ${version}.parent, 'kind', ${version}.kind,
  'author', (select name from person where id = ${version}.author_id), 'at', ${version}.at, 'reason', ${version}.reason, 'note', ${version}.note,
  'runId', ${version}.run_id, 'changedCells', ${version}.changed_cells, 'changedUnits', ${version}.changed_units,
  'isLockedVersion', exists (select from locked_week k where k.line_id = ${version}.line_id and k.version = ${version}.number))`;

interface LineHeadRow extends Omit<LineHead, 'isHandOverSpent' | 'version' | 'run' | 'locked' | 'handOver'> {
  version: VersionSummary | null;
  run: RunHead | null;
  locked: LockedWeek[];
  handOver: LineHead['handOver'];
  isHandOverSpent: boolean;
}

/** Heads of lines, by category name and line name. `lineIds` and `categories`: null = all. */
export async function listLineHeads(
  tx: Tx,
  { lineIds, categories }: { lineIds: readonly number[] | null; categories: readonly number[] | null },
): Promise<LineHead[]> {
  const rows = await selectRows<LineHeadRow>(
    tx,
    `select json_build_object('id', l.id, 'name', l.name) as line, json_build_object('id', c.id, 'name', c.name) as category,
            case when v.id is not null then ${versionJson('v')} end as version,
            v.author_id as "versionAuthorId",
            case when r.id is not null then json_build_object('id', r.id, 'at', r.at, 'salesTo', r.sales_to, 'salesRevision', r.sales_revision_id,
              'calendarRevision', r.calendar_revision_id, 'firstWeek', r.first_week, 'weeks', r.weeks) end as run,
            coalesce((select json_agg(json_build_object('weekStart', k.week_start, 'version', k.version, 'actor', p.name, 'at', k.at) order by k.week_start)
                      from locked_week k join person p on p.id = k.actor_id where k.line_id = l.id), '[]') as locked,
            case when h.id is not null then json_build_object('state', h.state, 'version', h.version, 'actor', hp.name, 'actorId', h.actor_id, 'at', h.at,
              'comment', h.comment) end as "handOver",
            (exists (select from plan_version f where f.line_id = l.id and f.kind = 'forecast' and f.number > h.version)
              or exists (select from lock_event u where u.line_id = l.id and not u.locked and u.at > h.at)) as "isHandOverSpent",
            case when o.id is not null then json_build_object('id', o.id, 'opens', o.opens, 'due', o.due, 'firstWeek', o.first_week, 'lastWeek', o.last_week)
            end as round
     from product_line l
     join category c on c.id = l.category_id
     left join lateral (select * from plan_version where line_id = l.id order by number desc limit 1) v on true
     left join forecast_run r on r.id = v.run_id
     left join lateral (select * from hand_over where line_id = l.id order by id desc limit 1) h on true
     left join person hp on hp.id = h.actor_id
     left join lateral (select * from round where category_id = l.category_id order by id desc limit 1) o on true
     where ($lineIds::int[] is null or l.id = any($lineIds::int[])) and ($categories::int[] is null or l.category_id = any($categories::int[]))
     order by lower(c.name), c.id, lower(l.name), l.id`,
    { lineIds, categories },
  );
  return rows.map((row) => ({
    ...row,
    version: row.version && toVersion(row.version),
    run: row.run && { ...row.run, at: toInstant(row.run.at) },
    locked: row.locked.map((week) => ({ ...week, at: toInstant(week.at) })),
    handOver: row.handOver && { ...row.handOver, at: toInstant(row.handOver.at) },
  }));
}

const toInstant = (at: string): string => new Date(at).toISOString();
const toVersion = (version: VersionSummary): VersionSummary => ({ ...version, at: toInstant(version.at) });

export function findCategory(tx: Tx, id: number, categories: number[] | null): Promise<Named | null> {
  return selectRow<Named>(
    tx,
    `select id, name from category where id = $id and ($categories::int[] is null or id = any($categories::int[]))`,
    { id, categories },
  );
}

export async function findNewestRound(tx: Tx, categoryId: number): Promise<Round | null> {
  return selectRow<Round>(
    tx,
    `select id, opens::text, due::text, first_week::text as "firstWeek", last_week::text as "lastWeek"
     from round where category_id = $categoryId order by id desc limit 1`,
    { categoryId },
  );
}

export async function insertRound(
  tx: Tx,
  round: {
    categoryId: number;
    opens: string | null;
    due: string | null;
    firstWeek: string;
    lastWeek: string;
    actorId: number;
  },
): Promise<Round> {
  const row = await selectRow<Round>(
    tx,
    `insert into round (category_id, opens, due, first_week, last_week, actor_id)
     values ($categoryId, coalesce($opens::date, current_date), coalesce($due::date, current_date + 7), $firstWeek, $lastWeek, $actorId)
     returning id, opens::text, due::text, first_week::text as "firstWeek", last_week::text as "lastWeek"`,
    round,
  );
  if (!row) throw new Error('round was not stored');
  return row;
}

/** One series of a line's newest plan: the model of its run and the plan in force. */
export interface StoredSeries {
  lineId: number;
  itemId: number;
  locationId: number;
  unitStep: number;
  model: number[];
  plan: number[];
}

/** Series of the lines' newest versions in the order in which totals are spread (item, then location). */
export function listPlanSeries(tx: Tx, lineIds: readonly number[]): Promise<StoredSeries[]> {
  return selectRows<StoredSeries>(
    tx,
    `select s.line_id as "lineId", s.item_id as "itemId", s.location_id as "locationId", s.unit_step as "unitStep", to_json(s.model) as model,
            to_json(p.plan) as plan
     from plan_series p
     cross join lateral (select run_id from plan_version where line_id = p.line_id order by number desc limit 1) v
     join run_series s on s.run_id = v.run_id and s.line_id = p.line_id and s.item_id = p.item_id and s.location_id = p.location_id
     where p.line_id = any($lineIds::int[])
     order by s.line_id, s.item_id, s.location_id`,
    { lineIds },
  );
}

/** Series of one line in one run, in the same order. */
export function listRunModels(tx: Tx, lineId: number, runId: number): Promise<Omit<StoredSeries, 'plan'>[]> {
  return selectRows(
    tx,
    `select line_id as "lineId", item_id as "itemId", location_id as "locationId", unit_step as "unitStep", to_json(model) as model
     from run_series where run_id = $runId and line_id = $lineId order by item_id, location_id`,
    { lineId, runId },
  );
}

/** One week of a line's series: what its run says of it, and the plan in force (null where the plan doesn't hold the series). */
export interface WhyCellRow {
  itemId: number;
  locationId: number;
  unitStep: number;
  model: number;
  mean: number;
  base: number;
  /** Natural-log parts of the median by factor name. */
  logParts: Record<string, number>;
  plan: number | null;
}

/** Series of one line in one run, by item and location, in the week at `position` (1-based) of the run. */
export function listWhyCells(tx: Tx, lineId: number, runId: number, position: number): Promise<WhyCellRow[]> {
  return selectRows<WhyCellRow>(
    tx,
    `select s.item_id as "itemId", s.location_id as "locationId", s.unit_step as "unitStep", s.model[$position::int] as model, s.mean[$position::int] as mean,
            s.base[$position::int] as base, p.plan[$position::int] as plan,
            coalesce((select jsonb_object_agg(e.key, e.value->($position::int - 1)) from jsonb_each(s.parts) e), '{}') as "logParts"
     from run_series s
     left join plan_series p on p.line_id = s.line_id and p.item_id = s.item_id and p.location_id = s.location_id
     where s.run_id = $runId and s.line_id = $lineId
     order by s.item_id, s.location_id`,
    { lineId, runId, position },
  );
}

export interface StoredOverride extends ReplayedOverride {
  lineId: number;
  version: number;
  authorId: number;
  author: string;
  at: string;
  reasonId: number | null;
  reason: string | null;
  note: string | null;
  /** Model of the scope by week, first to last, when it was made. */
  baseModel: number[];
}

/** Overrides of the lines that reach into the weeks from `firstWeek` on, in their order. `firstWeek` null = all. */
export async function listOverrides(
  tx: Tx,
  lineIds: readonly number[],
  firstWeek: string | null,
): Promise<StoredOverride[]> {
  const rows = await selectRows<StoredOverride & { itemId: number | null; locationId: number | null }>(
    tx,
    `select o.id, o.line_id as "lineId", o.sequence, o.item_id as "itemId", o.location_id as "locationId", to_char(o.first_week, 'YYYY-MM-DD') as "firstWeek",
            to_char(o.last_week, 'YYYY-MM-DD') as "lastWeek", o.operation, o.value, v.number as version, v.author_id as "authorId", p.name as author,
            to_json(v.at) as at, o.reason_id as "reasonId", e.name as reason, o.note, to_json(o.base_model) as "baseModel"
     from override o
     join plan_version v on v.id = o.version_id
     join person p on p.id = v.author_id
     left join reason e on e.id = o.reason_id
     where o.line_id = any($lineIds::int[]) and ($firstWeek::date is null or o.last_week >= $firstWeek::date)
     order by o.line_id, o.sequence`,
    { lineIds, firstWeek },
  );
  return rows.map(({ itemId, locationId, ...override }) => ({
    ...override,
    at: toInstant(override.at),
    scope: { itemId, locationId },
  }));
}

export async function findLastSequence(tx: Tx, lineId: number): Promise<number> {
  const row = await selectRow<{ sequence: number | null }>(
    tx,
    'select max(sequence) as sequence from override where line_id = $lineId',
    { lineId },
  );
  return row?.sequence ?? 0;
}

/** Versions of a line, newest first. */
export async function listVersions(tx: Tx, lineId: number): Promise<VersionSummary[]> {
  const rows = await selectRows<{ version: VersionSummary }>(
    tx,
    `select ${versionJson('v')} as version from plan_version v where v.line_id = $lineId order by v.number desc`,
    { lineId },
  );
  return rows.map(({ version }) => toVersion(version));
}

/** Link of a line's chain, for rebuilding. */
export interface ChainLink {
  id: number;
  number: number;
  runId: number;
  firstWeek: string;
  weeks: number;
  heldWeeks: string[];
  hasSnapshot: boolean;
}

/** Versions up to a number, ascending. */
export function listChain(tx: Tx, lineId: number, upTo: number): Promise<ChainLink[]> {
  return selectRows<ChainLink>(
    tx,
    `select v.id, v.number, v.run_id as "runId", r.first_week::text as "firstWeek", r.weeks, to_json(v.held_weeks) as "heldWeeks",
            exists (select from plan_snapshot s where s.version_id = v.id) as "hasSnapshot"
     from plan_version v join forecast_run r on r.id = v.run_id
     where v.line_id = $lineId and v.number <= $upTo order by v.number`,
    { lineId, upTo },
  );
}

export function listSnapshot(
  tx: Tx,
  versionId: number,
): Promise<{ itemId: number; locationId: number; plan: number[] }[]> {
  return selectRows(
    tx,
    `select item_id as "itemId", location_id as "locationId", to_json(plan) as plan from plan_snapshot
     where version_id = $versionId order by item_id, location_id`,
    { versionId },
  );
}

export interface RunSeriesRow {
  itemId: number;
  locationId: number;
  unitStep: number;
  method: string;
  model: number[];
  base: number[];
  p2_5: number[];
  p10: number[];
  p50: number[];
  p90: number[];
  p97_5: number[];
  price: (number | null)[];
  marks: Record<string, string[]>;
}

/** What a run says of a line's series, by item and location. Unknown prices are null. */
export function listRunSeries(tx: Tx, lineId: number, runId: number): Promise<RunSeriesRow[]> {
  return selectRows<RunSeriesRow>(
    tx,
    `select item_id as "itemId", location_id as "locationId", unit_step as "unitStep", method, to_json(model) as model, to_json(base) as base, to_json(p2_5) as p2_5,
            to_json(p10) as p10, to_json(p50) as p50, to_json(p90) as p90, to_json(p97_5) as p97_5,
            (select json_agg(nullif(x, 'NaN') order by n) from unnest(price) with ordinality as u(x, n)) as price, marks
     from run_series where run_id = $runId and line_id = $lineId order by item_id, location_id`,
    { lineId, runId },
  );
}

export interface RunTotalRow {
  itemId: number | null;
  locationId: number | null;
  p2_5: number[];
  p10: number[];
  p50: number[];
  p90: number[];
  p97_5: number[];
}

export function listRunTotals(tx: Tx, lineId: number, runId: number): Promise<RunTotalRow[]> {
  return selectRows<RunTotalRow>(
    tx,
    `select item_id as "itemId", location_id as "locationId", to_json(p2_5) as p2_5, to_json(p10) as p10, to_json(p50) as p50, to_json(p90) as p90,
            to_json(p97_5) as p97_5
     from run_total where run_id = $runId and line_id = $lineId order by item_id nulls first, location_id nulls first`,
    { lineId, runId },
  );
}

export interface PlannedItem {
  id: number;
  code: string;
  name: string;
  unitStep: number;
  caseSize: number | null;
}

export function listItems(tx: Tx, ids: readonly number[]): Promise<PlannedItem[]> {
  return selectRows<PlannedItem>(
    tx,
    `select id, code, name, unit_step::float8 as "unitStep", case_size::float8 as "caseSize" from item where id = any($ids::int[]) order by code`,
    { ids },
  );
}

export function listLocations(tx: Tx, ids: readonly number[]): Promise<(Named & { code: string })[]> {
  return selectRows(tx, 'select id, code, name from location where id = any($ids::int[]) order by name, id', { ids });
}

/** Fits of the lines in the runs of their newest versions. */
export function listFits(
  tx: Tx,
  pairs: readonly { lineId: number; runId: number }[],
): Promise<
  { lineId: number; findings: Finding[]; summary: Record<string, number>; specification: Record<string, unknown> }[]
> {
  return selectRows(
    tx,
    `select f.line_id as "lineId", f.findings, f.summary, f.specification
     from fit f join jsonb_to_recordset($pairs::jsonb) as p("lineId" int, "runId" int) on f.line_id = p."lineId" and f.run_id = p."runId"`,
    { pairs: JSON.stringify(pairs) },
  );
}

export async function findRun(tx: Tx, id: number): Promise<RunHead> {
  const row = await selectRow<RunHead>(
    tx,
    `select id, to_json(at) as at, sales_to::text as "salesTo", sales_revision_id as "salesRevision", calendar_revision_id as "calendarRevision",
            first_week::text as "firstWeek", weeks from forecast_run where id = $id`,
    { id },
  );
  if (!row) throw new Error(`there is no run ${id}`);
  return { ...row, at: toInstant(row.at) };
}

/** Newest revision of the sales that touch a category; null without any. */
export async function findCategorySalesRevision(tx: Tx, categoryId: number): Promise<number | null> {
  const row = await selectRow<{ id: number | null }>(
    tx,
    `select max(r.id) as id from sales_revision r join import_category c on c.import_id = r.import_id where c.category_id = $categoryId`,
    { categoryId },
  );
  return row?.id ?? null;
}

/** Net value planned by line over its open weeks, plan × expected price paid; lines without a known price are left out. */
export async function sumPlannedValue(tx: Tx, lineIds: readonly number[]): Promise<Map<number, number>> {
  const rows = await selectRows<{ lineId: number; value: number }>(
    tx,
    `select p.line_id as "lineId", sum(u.units * u.price) as value
     from plan_series p
     cross join lateral (select run_id from plan_version where line_id = p.line_id order by number desc limit 1) v
     join run_series s on s.run_id = v.run_id and s.line_id = p.line_id and s.item_id = p.item_id and s.location_id = p.location_id
     cross join lateral unnest(p.plan, s.price) with ordinality as u(units, price, week)
     where p.line_id = any($lineIds::int[]) and u.price <> 'NaN'
       and not exists (select from locked_week k where k.line_id = p.line_id and k.week_start = p.first_week + 7 * (u.week::int - 1))
     group by p.line_id`,
    { lineIds },
  );
  return new Map(rows.map(({ lineId, value }) => [lineId, value]));
}

export function listReasons(tx: Tx): Promise<{ id: number; name: string; isActive: boolean }[]> {
  return selectRows(tx, 'select id, name, is_active as "isActive" from reason');
}

/** Active people who hold one of the roles for the category. */
export async function listPeopleInRoles(tx: Tx, categoryId: number, roles: readonly string[]): Promise<number[]> {
  const rows = await selectRows<{ id: number }>(
    tx,
    `select distinct p.id from person p join category_assignment a on a.person_id = p.id
     where p.is_active and a.role = any($roles::text[]) and (a.category_id = $categoryId or a.category_id is null) order by p.id`,
    { categoryId, roles },
  );
  return rows.map(({ id }) => id);
}

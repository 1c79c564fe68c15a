import type { Express } from 'express';
import request, { type Response } from 'supertest';
import { expect } from 'vitest';
import { Job } from '../../../shared/contracts/jobs.ts';
import {
  LinePlan,
  SavedOverrides,
  VersionState,
  type NewOverride,
  type OverrideScope,
} from '../../../shared/contracts/plan.ts';
import { Problem } from '../../../shared/contracts/problem.ts';
import type { Role } from '../../../shared/domain/roles.ts';
import { addWeeks } from '../../../shared/domain/weeks.ts';
import { buildApp } from '../../../server/app.ts';
import { forecastCategoryJob } from '../../../server/features/plan/plan.jobs.ts';
import type { Actor } from '../../../server/lib/authorise.ts';
import { openTestDeps, signIn, type TestDeps } from '../../factories/deps.ts';
import { runQueuedJobs } from '../../factories/jobs.ts';
import { makePerson } from '../../factories/people.ts';
import { makeRange, type MadeRange } from '../../factories/range.ts';
import { makeSales, type SoldFacts } from '../../factories/sales.ts';

export const lineScope: OverrideScope = { itemId: null, locationId: null };

/** One person at the API. */
export interface PersonAtApi {
  actor: Actor;
  get(path: string): Promise<Response>;
  post(path: string, body: object): Promise<Response>;
  put(path: string, body: object): Promise<Response>;
  patch(path: string, body: object): Promise<Response>;
}

export interface PlanWorld extends MadeRange {
  deps: TestDeps;
  app: Express;
  planner: PersonAtApi;
  /** A second planner. */
  colleague: PersonAtApi;
  lead: PersonAtApi;
  viewer: PersonAtApi;
  finance: PersonAtApi;
  /** Planner of another category. */
  stranger: PersonAtApi;
  reasonId: number;
  /** Signs another person in. */
  enter(role: Role, categoryId: number, name: string): Promise<PersonAtApi>;
  close(): Promise<void>;
}

/** A category with one line, sales, and people; nothing is forecast yet. */
export async function makePlanWorld({
  items = 3,
  locations = 2,
  weeks = 60,
  factsOf,
}: {
  items?: number;
  locations?: number;
  weeks?: number;
  factsOf?: (series: number, week: number) => SoldFacts | null;
} = {}): Promise<PlanWorld> {
  const deps = await openTestDeps();
  const { database } = deps;
  const range = await makeRange(database, { items, locations });
  const elsewhere = await makeRange(database, { items: 1 });
  const app = buildApp(deps);
  const enter = async (role: Role, categoryId: number, name: string): Promise<PersonAtApi> => {
    const actor = await makePerson(database, { name, assignments: [{ role, categoryId }] });
    const cookie = await signIn(deps, actor);
    return {
      actor,
      get: (path) => request(app).get(`/api${path}`).set('cookie', cookie),
      post: (path, body) => request(app).post(`/api${path}`).set('cookie', cookie).send(body),
      put: (path, body) => request(app).put(`/api${path}`).set('cookie', cookie).send(body),
      patch: (path, body) => request(app).patch(`/api${path}`).set('cookie', cookie).send(body),
    };
  };
  const { categoryId } = range;
  const planner = await enter('planner', categoryId, 'Pia Planner');
  await makeSales(database, { ...range, actorId: planner.actor.id, weeks, ...(factsOf ? { factsOf } : {}) });
  const { rows } = await database.pool.query<{ id: number }>('select id from reason order by position limit 1');
  return {
    ...range,
    deps,
    app,
    planner,
    colleague: await enter('planner', categoryId, 'Cato Colleague'),
    lead: await enter('category-lead', categoryId, 'Lea Lead'),
    viewer: await enter('viewer', categoryId, 'Vera Viewer'),
    finance: await enter('finance', categoryId, 'Finn Finance'),
    stranger: await enter('planner', elsewhere.categoryId, 'Sten Stranger'),
    reasonId: rows[0]!.id,
    enter,
    close: () => deps.close(),
  };
}

/** Presses *forecast* and does the queued work. */
export async function forecast(world: PlanWorld, horizonWeeks = 8): Promise<Job> {
  const answer = await world.planner.post(`/plan/categories/${world.categoryId}/forecast`, { horizonWeeks });
  expect(answer.status, answer.text).toBe(202);
  await runQueuedJobs(world.deps, { 'forecast.category': forecastCategoryJob });
  const job = Job.parse((await world.planner.get(`/jobs/${Job.parse(answer.body).id}`)).body);
  expect(job.problem).toBeNull();
  expect(job.state).toBe('done');
  return job;
}

export async function readPlan(person: PersonAtApi, lineId: number): Promise<LinePlan> {
  const answer = await person.get(`/plan/lines/${lineId}`);
  expect(answer.status, answer.text).toBe(200);
  return LinePlan.parse(answer.body);
}

export async function readVersion(person: PersonAtApi, lineId: number, number: number): Promise<VersionState> {
  const answer = await person.get(`/plan/lines/${lineId}/versions/${number}`);
  expect(answer.status, answer.text).toBe(200);
  return VersionState.parse(answer.body);
}

/** An override with a reason and a note, of one week unless `lastWeek` says otherwise. */
export function override(
  world: PlanWorld,
  plan: LinePlan,
  change: Partial<Omit<NewOverride, 'firstWeek' | 'lastWeek'>> & { week?: number; lastWeek?: number },
): NewOverride {
  const { week = 0, lastWeek = week, ...rest } = change;
  return {
    scope: lineScope,
    operation: 'set to',
    value: 100,
    reasonId: world.reasonId,
    note: 'agreed on the phone',
    ...rest,
    firstWeek: weekAt(plan, week),
    lastWeek: weekAt(plan, lastWeek),
  };
}

export function weekAt(plan: LinePlan, week: number): string {
  return addWeeks(plan.planFirstWeek!, week);
}

export function save(
  person: PersonAtApi,
  lineId: number,
  baseVersion: number,
  overrides: readonly NewOverride[],
): Promise<Response> {
  return person.patch(`/plan/lines/${lineId}/overrides`, { baseVersion, overrides });
}

export function savedOf(answer: Response): SavedOverrides {
  expect(answer.status, answer.text).toBe(200);
  return SavedOverrides.parse(answer.body);
}

export function problemOf(answer: Response): Problem {
  expect(answer.headers['content-type'], answer.text).toContain('application/problem+json');
  return Problem.parse(JSON.parse(answer.text));
}

/** Submits the newest version and locks weeks of it. */
export async function submitAndLock(world: PlanWorld, firstWeek = 0, lastWeek = firstWeek): Promise<LinePlan> {
  const plan = await readPlan(world.planner, world.lineId);
  const version = plan.version!.number;
  const submitted = await world.planner.post(`/plan/lines/${world.lineId}/submit`, { version, comment: null });
  expect(submitted.status, submitted.text).toBe(200);
  const locked = await world.lead.post(`/plan/lines/${world.lineId}/lock`, {
    version,
    firstWeek: weekAt(plan, firstWeek),
    lastWeek: weekAt(plan, lastWeek),
    comment: null,
  });
  expect(locked.status, locked.text).toBe(200);
  return LinePlan.parse(locked.body);
}

/** Plan of a scope by week. */
export function sumPlan(plan: Pick<LinePlan, 'series'>, scope: OverrideScope = lineScope): number[] {
  const rows = plan.series.filter(
    ({ itemId, locationId }) =>
      (scope.itemId === null || scope.itemId === itemId) &&
      (scope.locationId === null || scope.locationId === locationId),
  );
  return rows[0]!.plan.map((_, week) => rows.reduce((sum, row) => sum + row.plan[week]!, 0));
}

/** Numbers by series, for comparing states. */
export function numbersOf(state: {
  series: readonly { itemId: number; locationId: number; plan: number[] }[];
}): Record<string, number[]> {
  return Object.fromEntries(state.series.map(({ itemId, locationId, plan }) => [`${itemId}/${locationId}`, plan]));
}

/** Counts of everything that a change of the plan writes. */
export async function countWritten({ deps }: PlanWorld): Promise<Record<string, number>> {
  const tables = [
    'plan_version',
    'override',
    'plan_snapshot',
    'hand_over',
    'lock_event',
    'round',
    'mail_outbox',
    'audit_entry',
    'forecast_run',
    'run_series',
  ];
  const { rows } = await deps.database.pool.query<Record<string, number>>(
    `select ${tables.map((table) => `(select count(*)::int from ${table}) as ${table}`).join(', ')}`,
  );
  return rows[0]!;
}

/** Runs statements as the database's owner: for laying faults. */
export async function asOwner({ deps }: PlanWorld, sql: string): Promise<void> {
  const { default: pg } = await import('pg');
  const client = new pg.Client({ connectionString: deps.testDatabase.ownerUrl });
  await client.connect();
  try {
    await client.query(sql);
  } finally {
    await client.end();
  }
}

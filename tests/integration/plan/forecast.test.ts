import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { Job } from '../../../shared/contracts/jobs.ts';
import { LineFitView } from '../../../shared/contracts/lines.ts';
import { CategoryPlan, Round } from '../../../shared/contracts/plan.ts';
import { WaitingList } from '../../../shared/contracts/waiting.ts';
import { weekLabel } from '../../../shared/domain/weeks.ts';
import { forecastCategoryJob } from '../../../server/features/plan/plan.jobs.ts';
import { buildImporter } from '../../factories/imports.ts';
import { runQueuedJobs } from '../../factories/jobs.ts';
import { signIn } from '../../factories/deps.ts';
import { makeItem, makeLine, makeRange } from '../../factories/range.ts';
import { makeSales } from '../../factories/sales.ts';
import {
  asOwner,
  countWritten,
  forecast,
  lineScope,
  makePlanWorld,
  numbersOf,
  override,
  problemOf,
  readPlan,
  save,
  savedOf,
  submitAndLock,
  sumPlan,
  weekAt,
  type PersonAtApi,
  type PlanWorld,
} from './plan-world.ts';

let world: PlanWorld;
beforeEach(async () => {
  world = await makePlanWorld();
});
afterEach(() => world.close());

const start = (person: PersonAtApi, categoryId = world.categoryId, horizonWeeks = 8) =>
  person.post(`/plan/categories/${categoryId}/forecast`, { horizonWeeks });
async function readCategory(person: PersonAtApi): Promise<CategoryPlan> {
  const answer = await person.get(`/plan/categories/${world.categoryId}`);
  expect(answer.status, answer.text).toBe(200);
  return CategoryPlan.parse(answer.body);
}
async function waitingKinds(person: PersonAtApi): Promise<string[]> {
  return WaitingList.parse((await person.get('/waiting')).body).entries.map(({ kind }) => kind);
}
const multiplySales = (factor: number, sql = '') =>
  world.deps.database.pool.query(`update sales_week set units = round(units * $1) ${sql}`, [factor]);

describe('a forecast of a category', () => {
  it('gives every line a fit, a version, ranges and an open round', async () => {
    expect(await readPlan(world.planner, world.lineId)).toMatchObject({
      version: null,
      run: null,
      planWeeks: 0,
      may: { override: false, forecast: true },
    });
    const secondLine = await makeLine(world.deps.database, world.categoryId, 'Second line');
    const item = await makeItem(world.deps.database, secondLine, { unitStep: 6 });
    await makeSales(world.deps.database, {
      actorId: world.planner.actor.id,
      categoryId: world.categoryId,
      itemIds: [item],
      locationIds: world.locationIds,
    });
    const job = await forecast(world);
    expect(job.result).toMatchObject({ lines: 2 });
    expect(job.progress).toBe(1);

    const plan = await readPlan(world.planner, world.lineId);
    expect(plan).toMatchObject({
      state: 'draft',
      planWeeks: 8,
      version: { number: 1, parent: null, kind: 'forecast' },
      isBehindSales: false,
      round: { firstWeek: weekAt(plan, 0), lastWeek: weekAt(plan, 7) },
    });
    expect(plan.series).toHaveLength(6);
    for (const series of plan.series) {
      expect(series.plan).toEqual(series.model);
      expect(series.model.every((units) => Number.isInteger(units) && units > 0)).toBe(true);
      expect(series.units).toHaveLength(52);
      expect(series.lastYear).toEqual(series.units.slice(0, 8));
      expect(series.price.every((price) => price === 2)).toBe(true);
      expect(
        series.p2_5.every((low, week) => low <= series.p50[week]! && series.p50[week]! <= series.p97_5[week]!),
      ).toBe(true);
    }
    expect(plan.totals.map(({ scope }) => scope)).toContainEqual(lineScope);
    expect(plan.totals).toHaveLength(1 + 3 + 2);
    expect(plan.weekline).toMatchObject({ planned: sumPlan(plan) });
    expect(plan.weekline!.sold).toHaveLength(60);
    const stepped = await readPlan(world.planner, secondLine);
    expect(stepped.series.every(({ model }) => model.every((units) => units % 6 === 0))).toBe(true);

    const category = await readCategory(world.viewer);
    expect(category.lines.map(({ name }) => name)).toContain('Second line');
    expect(category.lines.find(({ id }) => id === world.lineId)).toMatchObject({
      state: 'draft',
      plan: sumPlan(plan),
      model: sumPlan(plan),
      overrides: 0,
    });
    expect(category.weekline!.planned).toEqual(sumPlan(plan).map((units, week) => units + sumPlan(stepped)[week]!));
    expect(category.may).toEqual({ forecast: false, changeRound: false });
    const { fit } = LineFitView.parse((await world.planner.get(`/lines/${world.lineId}/fit`)).body);
    expect(fit!.rows).toBeGreaterThan(100);
    expect(fit!.coefficients.length).toBeGreaterThan(0);
  });

  it('gives a line with too little history a simple average and says so', async () => {
    const young = await makeLine(world.deps.database, world.categoryId, 'Young line');
    const item = await makeItem(world.deps.database, young);
    await makeSales(world.deps.database, {
      actorId: world.planner.actor.id,
      categoryId: world.categoryId,
      itemIds: [item],
      locationIds: world.locationIds.slice(0, 1),
      firstWeek: '2026-02-09',
      weeks: 4,
      factsOf: () => ({ units: 12, price: 3, regularPrice: 3 }),
    });
    await forecast(world);
    const plan = await readPlan(world.planner, young);
    expect(plan.series).toEqual([expect.objectContaining({ method: 'simple-average', model: Array(8).fill(12) })]);
    expect(plan.findings.length).toBeGreaterThan(0);
    savedOf(await save(world.planner, young, 1, [override(world, plan, { value: 20 })]));
  });

  it('carries overrides over, marks those whose model moved and keeps those that can’t be met for a decision', async () => {
    await forecast(world);
    const before = await readPlan(world.planner, world.lineId);
    const [moved, still] = before.series;
    const { itemId, locationId } = moved!;
    savedOf(
      await save(world.planner, world.lineId, 1, [
        override(world, before, { scope: { itemId, locationId }, week: 1, value: 77 }),
        override(world, before, {
          scope: { itemId: before.series[2]!.itemId, locationId: before.series[2]!.locationId },
          week: 1,
          value: 55,
        }),
        override(world, before, {
          scope: { itemId, locationId: null },
          week: 4,
          operation: 'add',
          value: -still!.model[4]! - 1,
        }),
      ]),
    );
    expect(await waitingKinds(world.planner)).toEqual(expect.not.arrayContaining(['override-due-another-look']));
    await multiplySales(0.2, `where item_id = ${itemId}`);
    await forecast(world);
    const after = await readPlan(world.planner, world.lineId);
    expect(after.version).toMatchObject({ number: 3, kind: 'forecast' });
    expect(after.series[0]!.plan[1]).toBe(77);
    expect(after.series[0]!.model[1]).toBeLessThan(moved!.model[1]! / 2);
    expect(after.overrides.map(({ isDueAnotherLook, needsDecision }) => ({ isDueAnotherLook, needsDecision }))).toEqual(
      [
        { isDueAnotherLook: true, needsDecision: null },
        { isDueAnotherLook: false, needsDecision: null },
        { isDueAnotherLook: true, needsDecision: expect.stringMatching(/W\d\d: it would take more units away/) },
      ],
    );
    expect((await readCategory(world.planner)).lines[0]).toMatchObject({ overrides: 3, dueAnotherLook: 2 });
    expect(await waitingKinds(world.planner)).toEqual(
      expect.arrayContaining(['line-to-submit', 'override-due-another-look', 'override-needs-decision']),
    );
  });

  it('isn’t touched by sales imported for locked weeks, which are accepted', async () => {
    await forecast(world);
    const locked = await submitAndLock(world, 0, 3);
    const importer = buildImporter(world.app, world.deps, await signIn(world.deps, world.planner.actor));
    const rows = world.itemCodes.map(
      (code) => `${weekLabel(weekAt(locked, 0))},${code},${world.locationCodes[0]},999,1998,2,2`,
    );
    const { id } = await importer.upload(
      'sales.csv',
      ['week,item,location,units,net_value,price,regular_price', ...rows].join('\n'),
    );
    expect(await importer.accept(id)).toMatchObject({ state: 'done', problem: null });

    const after = await readPlan(world.planner, world.lineId);
    expect(numbersOf(after)).toEqual(numbersOf(locked));
    expect(after).toMatchObject({ isBehindSales: true, lockedWeeks: locked.lockedWeeks });
    expect(await waitingKinds(world.planner)).toContain('forecast-behind-sales');
    await forecast(world);
    const again = await readPlan(world.planner, world.lineId);
    expect(again).toMatchObject({ isBehindSales: false, planFirstWeek: weekAt(locked, 1) });
    for (const [index, series] of again.series.entries()) {
      expect(series.plan.slice(0, 3)).toEqual(locked.series[index]!.plan.slice(1, 4));
    }
  });

  it('keeps a running round and opens a new one when its first week is sold', async () => {
    await forecast(world);
    const first = (await readCategory(world.planner)).round!;
    await forecast(world);
    expect((await readCategory(world.planner)).round).toEqual(first);
    await makeSales(world.deps.database, { ...world, actorId: world.planner.actor.id, weeks: 61 });
    await forecast(world);
    const next = (await readCategory(world.planner)).round!;
    expect(next.id).toBeGreaterThan(first.id);
    expect(next.firstWeek > first.firstWeek).toBe(true);
  });
});

describe('refused, with nothing written', () => {
  it('to a stranger, a viewer, and without sales', async () => {
    const counted = await countWritten(world);
    expect(problemOf(await start(world.stranger))).toMatchObject({ status: 404 });
    expect(problemOf(await start(world.viewer))).toMatchObject({ status: 403 });
    expect(problemOf(await start(world.planner, world.categoryId, 60))).toMatchObject({
      status: 422,
      errors: [{ pointer: '/horizonWeeks' }],
    });
    const empty = await makeRange(world.deps.database);
    const planner = await world.enter('planner', empty.categoryId, 'Early Planner');
    expect(problemOf(await start(planner, empty.categoryId))).toMatchObject({
      type: '/problems/no-sales',
      status: 409,
    });
    expect(problemOf(await world.stranger.get(`/plan/categories/${world.categoryId}`))).toMatchObject({ status: 404 });
    expect(problemOf(await world.stranger.get(`/plan/lines/${world.lineId}`))).toMatchObject({ status: 404 });
    expect(await countWritten(world)).toEqual(counted);
  });

  it('while one is running', async () => {
    expect((await start(world.planner)).status).toBe(202);
    expect(problemOf(await start(world.colleague))).toMatchObject({ type: '/problems/wrong-state', status: 409 });
    expect((await readCategory(world.planner)).activeJob).toMatchObject({ state: 'queued' });
  });

  it('when the last step fails: run, fits, versions and round are rolled back and the plan is as before', async () => {
    await forecast(world);
    const before = await readPlan(world.planner, world.lineId);
    await asOwner(
      world,
      `create function fail_late() returns trigger language plpgsql as $$ begin raise exception 'disk full'; end $$;
       create trigger fail_late before insert on audit_entry for each row when (new.action = 'generate-forecast') execute function fail_late();`,
    );
    await multiplySales(2);
    const job = Job.parse((await start(world.planner)).body);
    const counted = await countWritten(world);
    await runQueuedJobs(world.deps, { 'forecast.category': forecastCategoryJob });
    expect(Job.parse((await world.planner.get(`/jobs/${job.id}`)).body)).toMatchObject({
      state: 'failed',
      problem: { type: 'unexpected' },
    });
    expect(await countWritten(world)).toEqual(counted);
    expect(numbersOf(await readPlan(world.planner, world.lineId))).toEqual(numbersOf(before));
  });
});

describe('a round', () => {
  const path = (): string => `/plan/categories/${world.categoryId}/round`;

  it('gets other weeks and another due date from the lead, and decides when a line is locked', async () => {
    await forecast(world);
    const plan = await readPlan(world.planner, world.lineId);
    const change = { due: '2026-12-24', firstWeek: weekAt(plan, 0), lastWeek: weekAt(plan, 3) };
    const changed = await world.lead.put(path(), change);
    expect(Round.parse(changed.body)).toMatchObject(change);
    expect(await submitAndLock(world, 0, 3)).toMatchObject({ state: 'locked', round: change });
    const open = { scope: lineScope, week: 5, value: 300 };
    savedOf(await save(world.planner, world.lineId, 1, [override(world, plan, open)]));
  });

  it('is refused to others, in the wrong order of weeks, and rolled back after a late failure', async () => {
    await forecast(world);
    const plan = await readPlan(world.planner, world.lineId);
    const change = { due: '2026-12-24', firstWeek: weekAt(plan, 0), lastWeek: weekAt(plan, 3) };
    const counted = await countWritten(world);
    expect(problemOf(await world.planner.put(path(), change))).toMatchObject({ status: 403 });
    expect(problemOf(await world.stranger.put(path(), change))).toMatchObject({ status: 404 });
    const turned = await world.lead.put(path(), { ...change, firstWeek: weekAt(plan, 4), lastWeek: weekAt(plan, 3) });
    expect(problemOf(turned)).toMatchObject({ status: 422, errors: [{ pointer: '/lastWeek' }] });
    await asOwner(
      world,
      `create function fail_late() returns trigger language plpgsql as $$ begin raise exception 'disk full'; end $$;
       create trigger fail_late before insert on audit_entry for each row execute function fail_late();`,
    );
    expect(problemOf(await world.lead.put(path(), change))).toMatchObject({ status: 500 });
    expect(await countWritten(world)).toEqual(counted);
  });
});

it('expects the planned price in a promoted week and the last regular price elsewhere', async () => {
  const { pool } = world.deps.database;
  await forecast(world);
  const plan = await readPlan(world.planner, world.lineId);
  const { rows } = await pool.query<{ id: number }>(
    `insert into calendar_revision (change, actor_id) values ('edit', $1) returning id`,
    [world.planner.actor.id],
  );
  await pool.query(
    `insert into promotion_entry (revision_id, promotion, name, item_ids, first_week, last_week, depth, feature)
     values ($1, 'winter', 'Winter', $2, $3, $3, 0.25, 1)`,
    [rows[0]!.id, [world.itemIds[0]], weekAt(plan, 2)],
  );
  await forecast(world);
  const after = await readPlan(world.planner, world.lineId);
  expect(after.series[0]!.price).toEqual([2, 2, 1.5, 2, 2, 2, 2, 2]);
  expect(after.series[0]!.model[2]).toBeGreaterThan(after.series[0]!.base[2]! * 1.3);
  expect(after.promotions.find(({ name }) => name === 'Winter')).toMatchObject({
    firstWeek: weekAt(plan, 2),
    depth: 0.25,
  });
});

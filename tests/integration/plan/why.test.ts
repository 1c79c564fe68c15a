import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { WhyNumber, type LinePlan, type OverrideScope } from '../../../shared/contracts/plan.ts';
import { addWeeks } from '../../../shared/domain/weeks.ts';
import {
  asOwner,
  forecast,
  lineScope,
  makePlanWorld,
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

const promotedWeek = 3;
let world: PlanWorld;
let plan: LinePlan;

beforeAll(async () => {
  world = await makePlanWorld();
  await promoteFirstItem();
  await forecast(world);
}, 180_000);
afterAll(() => world.close());
beforeEach(async () => {
  plan = await readPlan(world.planner, world.lineId);
});

/** Plans 25 % off and advertised for the first item, as its promotions were sold, in the fourth week after the sales. */
async function promoteFirstItem(): Promise<void> {
  const weekStart = addWeeks('2025-01-06', 60 + promotedWeek);
  await asOwner(
    world,
    `with revision as (
       insert into calendar_revision (change, actor_id) values ('edit', ${world.planner.actor.id}) returning id
     )
     insert into promotion_entry (revision_id, promotion, name, item_ids, first_week, last_week, depth, feature)
     select id, 'spring', 'Spring feature', array[${world.itemIds[0]}], '${weekStart}', '${weekStart}', 0.25, 1 from revision`,
  );
}

function askWhy(person: PersonAtApi, { itemId, locationId }: OverrideScope, weekStart: string) {
  const ids = [itemId === null ? '' : `&itemId=${itemId}`, locationId === null ? '' : `&locationId=${locationId}`];
  return person.get(`/plan/lines/${world.lineId}/why?week=${weekStart}${ids.join('')}`);
}

async function readWhy(scope: OverrideScope, week: number, person = world.planner): Promise<WhyNumber> {
  const answer = await askWhy(person, scope, weekAt(plan, week));
  expect(answer.status, answer.text).toBe(200);
  return WhyNumber.parse(answer.body);
}

const add = (values: readonly number[]): number => values.reduce((total, value) => total + value, 0);
const sumModel = (scope: OverrideScope, week: number): number =>
  add(
    plan.series
      .filter(
        ({ itemId, locationId }) =>
          (scope.itemId ?? itemId) === itemId && (scope.locationId ?? locationId) === locationId,
      )
      .map(({ model }) => model[week]!),
  );
const firstItem = (): OverrideScope => ({ itemId: world.itemIds[0]!, locationId: null });

describe('why a number is what it is', () => {
  it('is told in parts that add up to the numbers that the grid shows, for a cell, an item, a location and the line', async () => {
    const { itemId, locationId } = plan.series[0]!;
    for (const scope of [{ itemId, locationId }, firstItem(), { itemId: null, locationId }, lineScope]) {
      for (const week of [0, promotedWeek, promotedWeek + 1]) {
        const why = await readWhy(scope, week);
        const { base, uplift, rounding, overrides } = why;
        expect(Math.abs(add(base.parts.map(({ units }) => units)) - base.units)).toBeLessThan(1e-9);
        expect(Math.abs(add(uplift.parts.map(({ units }) => units)) - uplift.units)).toBeLessThan(1e-9);
        expect(Math.abs(base.units + uplift.units + rounding - why.model)).toBeLessThan(1e-9);
        expect(why.model).toBe(sumModel(scope, week));
        expect(overrides).toEqual({ units: 0, steps: [] });
        expect(why.plan).toBe(sumPlan(plan, scope)[week]);
      }
    }
  });

  it('gives a total the sums of its series’ parts', async () => {
    const whole = await readWhy(lineScope, promotedWeek);
    const each = await Promise.all(plan.series.map((one) => readWhy(one, promotedWeek)));
    expect(whole.series).toBe(each.length);
    whole.base.parts.forEach(({ units }, at) =>
      expect(units).toBeCloseTo(add(each.map(({ base }) => base.parts[at]!.units)), 9),
    );
    whole.uplift.parts.forEach(({ units }, at) =>
      expect(units).toBeCloseTo(add(each.map(({ uplift }) => uplift.parts[at]!.units)), 9),
    );
  });

  it('shows what the promotion brings in its week alone, and the last one like it as sold', async () => {
    const promoted = await readWhy(firstItem(), promotedWeek);
    expect(promoted.uplift.parts[0]!.name).toBe('promotion');
    expect(promoted.uplift.parts[0]!.units).toBeGreaterThan(0.5 * promoted.base.units);
    const lastWeek = addWeeks('2025-01-06', 53);
    expect(promoted.lastPromotion).toMatchObject({
      firstWeek: lastWeek,
      lastWeek,
      weeks: 1,
      depth: 0.25,
      isFeatured: true,
    });
    const { unitsAWeek, ordinaryUnitsAWeek } = promoted.lastPromotion!;
    expect(unitsAWeek / ordinaryUnitsAWeek!).toBeGreaterThan(1.8);
    expect(unitsAWeek / ordinaryUnitsAWeek!).toBeLessThan(2.2);

    const quiet = await readWhy(firstItem(), 0);
    expect(quiet.uplift.units).toBeCloseTo(0, 9);
    expect(quiet.lastPromotion).toBeNull();
    expect((await readWhy(lineScope, promotedWeek)).lastPromotion).toBeNull();
  });

  it('holds the units of the same week a year before, over the same series', async () => {
    const { lastYear } = await readWhy(firstItem(), 2);
    const rows = plan.series.filter(({ itemId }) => itemId === world.itemIds[0]);
    expect(lastYear).toEqual({
      weekStart: addWeeks(weekAt(plan, 2), -52),
      units: add(rows.map((row) => row.lastYear[2]!)),
    });
  });

  it('tells what each override changed, in their order, up to the plan', async () => {
    const cell = { itemId: plan.series[0]!.itemId, locationId: plan.series[0]!.locationId };
    const saved = savedOf(
      await save(world.planner, world.lineId, plan.version!.number, [
        override(world, plan, { scope: cell, week: 5, operation: 'add', value: 40 }),
        override(world, plan, { week: 5, operation: 'scale by', value: 2 }),
      ]),
    );
    const why = await readWhy(cell, 5, world.viewer);
    const model = plan.series[0]!.model[5]!;
    expect(why.version).toBe(saved.version.number);
    expect(why.overrides.steps.map(({ overrideIds }) => overrideIds)).toEqual(saved.overrides.map(({ id }) => [id]));
    expect(why.overrides.steps[0]!.units).toBe(40);
    expect(why.overrides.units).toBe(add(why.overrides.steps.map(({ units }) => units)));
    expect(why.plan).toBe(model + why.overrides.units);
    expect(why.plan).toBe((await readPlan(world.planner, world.lineId)).series[0]!.plan[5]);
    expect(why.held).toBe(0);
  });

  it('is not told to a stranger of the category', async () => {
    const answer = await askWhy(world.stranger, lineScope, weekAt(plan, 0));
    expect(answer.status).toBe(404);
    expect(problemOf(answer).type).toBe('/problems/not-found');
  });

  it('is refused for a week outside the plan, for a day inside a week, and without a week', async () => {
    for (const week of [addWeeks(weekAt(plan, 0), -1), addWeeks(weekAt(plan, 0), 8), '2026-03-04', 'W11']) {
      const answer = await askWhy(world.planner, lineScope, week);
      expect(answer.status).toBe(422);
      expect(problemOf(answer)).toMatchObject({ type: '/problems/invalid-request', errors: [{ pointer: '/week' }] });
    }
    expect((await world.planner.get(`/plan/lines/${world.lineId}/why`)).status).toBe(422);
  });

  it('is not found for an item that the plan doesn’t hold', async () => {
    const answer = await askWhy(world.planner, { itemId: 999_999, locationId: null }, weekAt(plan, 0));
    expect(answer.status).toBe(404);
  });

  it('keeps a locked week’s number and says how much of it the new model and overrides don’t explain', async () => {
    const before = await submitAndLock(world, 6);
    const kept = sumPlan(before)[6]!;
    await asOwner(world, `update sales_week set units = 3 * units`);
    await forecast(world);
    plan = await readPlan(world.planner, world.lineId);
    const why = await readWhy(lineScope, 6);
    expect(why.plan).toBe(kept);
    expect(why.model).toBeGreaterThan(2 * kept);
    expect(why.held).toBeCloseTo(kept - why.model - why.overrides.units, 9);
  });
});

it('is asked for in vain before the first forecast', async () => {
  const young = await makePlanWorld({ items: 1, locations: 1, weeks: 12 });
  try {
    const answer = await young.planner.get(`/plan/lines/${young.lineId}/why?week=2026-03-02`);
    expect(answer.status).toBe(409);
    expect(problemOf(answer).type).toBe('/problems/no-forecast');
  } finally {
    await young.close();
  }
});

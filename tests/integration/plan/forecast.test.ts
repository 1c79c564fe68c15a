import { afterAll, beforeAll, expect, it } from 'vitest';
import { CategoryPlan } from '../../../shared/contracts/plan.ts';
import { forecast, makePlanWorld, readPlan, sumPlan, type PlanWorld } from './plan-world.ts';

let world: PlanWorld;
beforeAll(async () => {
  world = await makePlanWorld();
});
afterAll(() => world.close());

it('forecasts every line of a category and shows it', async () => {
  const before = await readPlan(world.planner, world.lineId);
  expect(before).toMatchObject({ version: null, run: null, planWeeks: 0, may: { override: false, forecast: true } });
  const job = await forecast(world);
  expect(job.result).toMatchObject({ lines: 1 });

  const plan = await readPlan(world.planner, world.lineId);
  expect(plan).toMatchObject({
    state: 'draft',
    planWeeks: 8,
    version: { number: 1, kind: 'forecast' },
    isBehindSales: false,
  });
  expect(plan.series).toHaveLength(6);
  for (const series of plan.series) {
    expect(series.plan).toEqual(series.model);
    expect(series.model.every(Number.isInteger)).toBe(true);
    expect(series.units).toHaveLength(52);
    expect(series.price.every((price) => price === 2)).toBe(true);
  }
  const category = CategoryPlan.parse((await world.viewer.get(`/plan/categories/${world.categoryId}`)).body);
  expect(category.lines[0]!.plan).toEqual(sumPlan(plan));
  expect(category.weekline!.planned).toEqual(sumPlan(plan));
  expect(plan.weekline!.sold).toHaveLength(60);
});

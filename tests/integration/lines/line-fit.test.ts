import { afterEach, beforeEach, expect, it } from 'vitest';
import { LineFitView } from '../../../shared/contracts/lines.ts';
import { forecast, makePlanWorld, type PlanWorld } from '../plan/plan-world.ts';

let world: PlanWorld;
beforeEach(async () => {
  // Depth and feature vary apart from each other, or their effects couldn't be.
  world = await makePlanWorld({
    weeks: 80,
    factsOf: (series, week) => {
      const cut = [0, 0.2, 0, 0, 0.35, 0, 0.1][(week + series) % 7]!;
      const feature = (week * 3 + series) % 5 === 0 ? 1 : 0;
      const wave = Math.sin(week * 1.7 + series) + Math.cos(week * 2.9 + 2 * series);
      return {
        units: Math.round((30 + 6 * series) * (1 - cut) ** -2 * Math.exp(0.4 * feature + 0.08 * wave)),
        price: 2 * (1 - cut),
        regularPrice: 2,
        feature,
        display: 0,
        gap: 0,
      };
    },
  });
});
afterEach(() => world.close());

it('stores the diagnosis with the fit and shows it to who may see the line', async () => {
  await forecast(world);
  const { fit, names } = LineFitView.parse((await world.viewer.get(`/lines/${world.lineId}/fit`)).body);
  const { diagnosis } = fit!;
  expect(diagnosis!.influential.every(({ item }) => names.items[item])).toBe(true);
  expect(diagnosis!.influential.every(({ location }) => names.locations[location])).toBe(true);
  expect(diagnosis).toMatchObject({ rows: fit!.rows, series: 6, items: 3, weeks: 80 });
  expect(diagnosis!.parameters).toBeGreaterThan(6);
  expect(diagnosis!.effects.map(({ name }) => name)).toEqual(fit!.coefficients.map(({ name }) => name));
  const feature = diagnosis!.effects.find(({ name }) => name === 'feature')!;
  expect(feature.estimate).toBeCloseTo(fit!.coefficients.find(({ name }) => name === 'feature')!.estimate, 12);
  for (const error of Object.values(feature.errors!)) expect(error).toBeGreaterThan(0);
  expect(feature.items!.members).toBe(3);
  expect(feature.items!.own).toBeGreaterThan(0);
  expect(feature.items!.own).toBeLessThan(1);
  expect(feature.items!.lowest.slope).toBeLessThanOrEqual(feature.items!.highest.slope);
  expect(diagnosis!.influential).toHaveLength(10);
  expect((await world.stranger.get(`/lines/${world.lineId}/fit`)).status).toBeGreaterThanOrEqual(403);
});

it('has no diagnosis where the line was too thin to be fitted', async () => {
  await world.deps.database.pool.query(
    `delete from sales_week where week_start > (select min(week_start) + 20 from sales_week)`,
  );
  await forecast(world);
  const { fit } = LineFitView.parse((await world.viewer.get(`/lines/${world.lineId}/fit`)).body);
  expect(fit!.coefficients).toEqual([]);
  expect(fit!.diagnosis).toBeNull();
});

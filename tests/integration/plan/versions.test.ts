import { afterAll, beforeAll, expect, it } from 'vitest';
import { VersionList } from '../../../shared/contracts/plan.ts';
import { inTransaction } from '../../../server/lib/database.ts';
import { packContentSource } from '../../../server/features/plan/plan.service.ts';
import { createRandom } from '../../../server/forecasting/ranges/random.ts';
import {
  forecast,
  makePlanWorld,
  numbersOf,
  override,
  problemOf,
  readPlan,
  readVersion,
  save,
  submitAndLock,
  weekAt,
  type PlanWorld,
} from './plan-world.ts';

let world: PlanWorld;
beforeAll(async () => {
  world = await makePlanWorld();
});
afterAll(() => world.close());

it('rebuilds every version as it was shown, over overrides, locks, unlocks, forecasts and snapshots', async () => {
  const shown = new Map<number, { numbers: Record<string, number[]>; firstWeek: string | null }>();
  const look = async (): Promise<void> => {
    const plan = await readPlan(world.planner, world.lineId);
    shown.set(plan.version!.number, { numbers: numbersOf(plan), firstWeek: plan.planFirstWeek });
  };
  const draw = createRandom(11);
  const choose = <T>(options: readonly T[]): T => options[Math.floor(draw() * options.length)]!;
  await forecast(world);
  await look();
  for (let step = 1; step <= 66; step += 1) {
    const plan = await readPlan(world.planner, world.lineId);
    if (step === 12) await submitAndLock(world, 1, 2);
    else if (step === 30) {
      await world.deps.database.pool.query('update sales_week set units = round(units * 1.4)');
      await forecast(world);
    } else if (step === 40) {
      await world.lead.post(`/plan/lines/${world.lineId}/unlock`, {
        firstWeek: weekAt(plan, 2),
        lastWeek: weekAt(plan, 2),
        reason: 'a promotion was moved',
      });
    } else if (step === 45) {
      await world.deps.database.pool.query(
        `insert into sales_week (item_id, location_id, week_start, import_id, revision_id, units, price, regular_price)
         select item_id, location_id, week_start + 7, import_id, revision_id, units, price, regular_price from sales_week
         where week_start = (select max(week_start) from sales_week)`,
      );
      await forecast(world, 10);
    } else if (step === 60) await submitAndLock(world, 0, 4);
    else {
      if (plan.state === 'submitted') await world.lead.post(`/plan/lines/${world.lineId}/return`, { comment: 'go on' });
      const series = choose(plan.series);
      const operation = choose(['set to', 'set to', 'add', 'scale by', 'clear'] as const);
      const open = Array.from({ length: plan.planWeeks }, (_, week) => week).filter(
        (week) => !plan.lockedWeeks.includes(weekAt(plan, week)),
      );
      const week = choose(open);
      await save(world.planner, world.lineId, plan.version!.number, [
        override(world, plan, {
          scope: {
            itemId: choose([series.itemId, series.itemId, null]),
            locationId: choose([series.locationId, series.locationId, null]),
          },
          week,
          lastWeek: open.includes(week + 1) ? week + 1 : week,
          operation,
          value: {
            'set to': Math.floor(draw() * 300),
            add: Math.floor(draw() * 60) - 20,
            'scale by': draw() * 2,
            clear: null,
          }[operation],
        }),
      ]);
    }
    await look();
  }
  const { versions } = VersionList.parse((await world.planner.get(`/plan/lines/${world.lineId}/versions`)).body);
  expect(versions.map(({ number }) => number)).toEqual([...shown.keys()].sort((a, b) => b - a));
  expect(versions.length).toBeGreaterThan(50);
  const { rows } = await world.deps.database.pool.query(
    'select distinct v.number from plan_snapshot s join plan_version v on v.id = s.version_id order by 1',
  );
  expect(rows).toEqual([{ number: 50 }]);
  for (const [number, { numbers, firstWeek }] of shown) {
    const rebuilt = await readVersion(world.planner, world.lineId, number);
    expect(rebuilt.planFirstWeek, `version ${number}`).toBe(firstWeek);
    expect(numbersOf(rebuilt), `version ${number}`).toEqual(numbers);
  }
  const locked = versions.filter(({ isLockedVersion }) => isLockedVersion);
  expect(locked.length).toBe(2);
  for (const { number } of locked) {
    const content = await inTransaction(world.deps.database, (tx) => packContentSource(tx, world.lineId, number));
    expect(numbersOf(content)).toEqual(shown.get(number)!.numbers);
    expect(content.locked.length).toBeGreaterThan(0);
    expect(content.overrides.every((override) => override.version <= number)).toBe(true);
  }
}, 300_000);

it('shows versions to nobody outside the category, and none that don’t exist', async () => {
  for (const path of ['versions', 'versions/1']) {
    expect(problemOf(await world.stranger.get(`/plan/lines/${world.lineId}/${path}`))).toMatchObject({ status: 404 });
  }
  expect(problemOf(await world.planner.get(`/plan/lines/${world.lineId}/versions/9999`))).toMatchObject({
    status: 404,
  });
  expect((await world.viewer.get(`/plan/lines/${world.lineId}/versions/1`)).status).toBe(200);
});

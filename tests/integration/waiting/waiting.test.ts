import { afterAll, beforeAll, expect, it } from 'vitest';
import { WaitingList, type WaitingEntry } from '../../../shared/contracts/waiting.ts';
import {
  forecast,
  makePlanWorld,
  problemOf,
  readPlan,
  submitAndLock,
  type PersonAtApi,
  type PlanWorld,
} from '../plan/plan-world.ts';
import request from 'supertest';

let world: PlanWorld;

beforeAll(async () => {
  world = await makePlanWorld({ items: 2, locations: 1 });
});
afterAll(() => world.close());

async function kindsFor(person: PersonAtApi): Promise<WaitingEntry['kind'][]> {
  const answer = await person.get('/waiting');
  expect(answer.status, answer.text).toBe(200);
  return WaitingList.parse(answer.body).entries.map(({ kind }) => kind);
}

it('goes from the planner to the lead to finance as the week moves on', async () => {
  expect(await kindsFor(world.planner)).toContain('no-forecast-yet');
  expect(await kindsFor(world.finance)).toEqual([]);

  await forecast(world);
  expect(await kindsFor(world.planner)).toContain('line-to-submit');

  const plan = await readPlan(world.planner, world.lineId);
  await world.planner.post(`/plan/lines/${world.lineId}/submit`, { version: plan.version!.number, comment: 'ready' });
  expect(await kindsFor(world.planner)).not.toContain('line-to-submit');
  const review = WaitingList.parse((await world.lead.get('/waiting')).body).entries.find(
    ({ kind }) => kind === 'line-to-review',
  );
  expect(review).toMatchObject({
    categoryId: world.categoryId,
    detail: 'ready',
    link: `/plan/${world.lineId}?category=${world.categoryId}`,
  });

  await world.lead.post(`/plan/lines/${world.lineId}/return`, { comment: 'again, please' });
  expect(await kindsFor(world.planner)).toContain('line-returned');

  await submitAndLock(world, 0, 7);
  expect(await kindsFor(world.finance)).toContain('pack-to-build');
  expect(await kindsFor(world.planner)).not.toContain('line-to-submit');
});

it('tells strangers and viewers nothing that isn’t theirs, and nobody anything without signing in', async () => {
  expect(await kindsFor(world.viewer)).toEqual([]);
  const strange = WaitingList.parse((await world.stranger.get('/waiting')).body).entries;
  expect(strange.filter(({ categoryId }) => categoryId === world.categoryId)).toEqual([]);
  expect(problemOf(await request(world.app).get('/api/waiting')).type).toBe('/problems/not-signed-in');
});

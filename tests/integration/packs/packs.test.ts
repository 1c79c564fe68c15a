import { createHash } from 'node:crypto';
import ExcelJS from 'exceljs';
import request from 'supertest';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { Job } from '../../../shared/contracts/jobs.ts';
import { PackList, type BuildPack } from '../../../shared/contracts/packs.ts';
import type { LinePlan } from '../../../shared/contracts/plan.ts';
import { buildPackJob } from '../../../server/features/packs/packs.jobs.ts';
import { signIn } from '../../factories/deps.ts';
import { runQueuedJobs } from '../../factories/jobs.ts';
import {
  asOwner,
  forecast,
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
} from '../plan/plan-world.ts';

let world: PlanWorld;
let locked: LinePlan;

beforeAll(async () => {
  world = await makePlanWorld({ items: 3, locations: 2 });
  await forecast(world);
  const plan = await readPlan(world.planner, world.lineId);
  savedOf(
    await save(world.planner, world.lineId, 1, [
      override(world, plan, { week: 1, value: 432, note: '=1+1 is no formula' }),
    ]),
  );
  locked = await submitAndLock(world, 0, 3);
});
afterAll(() => world.close());

const bodyOf = (change: Partial<BuildPack> = {}): BuildPack => ({
  categoryId: world.categoryId,
  firstWeek: weekAt(locked, 0),
  lastWeek: weekAt(locked, 3),
  lineIds: [world.lineId],
  ...change,
});

async function build(person: PersonAtApi, change: Partial<BuildPack> = {}): Promise<Job> {
  const answer = await person.post('/packs', bodyOf(change));
  expect(answer.status, answer.text).toBe(202);
  await runQueuedJobs(world.deps, { 'pack.build': buildPackJob });
  return Job.parse((await person.get(`/jobs/${Job.parse(answer.body).id}`)).body);
}

async function listPacks(person: PersonAtApi): Promise<PackList> {
  return PackList.parse((await person.get(`/packs?categoryId=${world.categoryId}`)).body);
}

async function fetchFile(person: PersonAtApi, id: number): Promise<Buffer> {
  const cookie = await signIn(world.deps, person.actor);
  const answer = await request(world.app)
    .get(`/api/packs/${id}/file`)
    .set('cookie', cookie)
    .buffer()
    .parse((response, done) => {
      const chunks: Buffer[] = [];
      response.on('data', (chunk: Buffer) => chunks.push(chunk));
      response.on('end', () => done(null, Buffer.concat(chunks)));
    });
  expect(answer.status).toBe(200);
  return answer.body as Buffer;
}

describe('a pack', () => {
  it('is built from the locked version, kept with its checksum and given again byte for byte', async () => {
    const job = await build(world.finance);
    expect(job).toMatchObject({ state: 'done', problem: null });
    const { packs, offer } = await listPacks(world.viewer);
    expect(offer?.lines).toMatchObject([{ id: world.lineId, lockedVersion: 2, lockedBy: 'Lea Lead' }]);
    expect(packs).toHaveLength(1);
    const [pack] = packs;
    const units = sumPlan(locked)
      .slice(0, 4)
      .reduce((sum, week) => sum + week, 0);
    expect(pack).toMatchObject({
      number: 1,
      by: 'Finn Finance',
      units,
      lines: [{ id: world.lineId, version: 2, units, isLocked: true }],
    });

    const first = await fetchFile(world.viewer, pack!.id);
    const second = await fetchFile(world.finance, pack!.id);
    expect(createHash('sha256').update(first).digest('hex')).toBe(pack!.sha256);
    expect(first.equals(second)).toBe(true);

    const workbook = new ExcelJS.Workbook();
    await workbook.xlsx.load(first as unknown as ExcelJS.Buffer);
    expect(workbook.worksheets.map(({ name }) => name)).toContain('Overrides');
    const texts: string[] = [];
    workbook.getWorksheet('Overrides')?.eachRow((row) => row.eachCell((cell) => texts.push(cell.text)));
    expect(texts).toContain('=1+1 is no formula');
  });

  it('gets the next number, also when two are asked for at once', async () => {
    const [one, two] = await Promise.all([world.finance.post('/packs', bodyOf()), world.lead.post('/packs', bodyOf())]);
    expect([one.status, two.status].sort()).toEqual([202, 409]);
    await runQueuedJobs(world.deps, { 'pack.build': buildPackJob });
    expect((await listPacks(world.finance)).packs.map(({ number }) => number)).toEqual([2, 1]);
  });

  it('is refused to those who may not build, and unknown to strangers', async () => {
    expect(problemOf(await world.planner.post('/packs', bodyOf())).type).toBe('/problems/not-allowed');
    expect(problemOf(await world.stranger.post('/packs', bodyOf())).type).toBe('/problems/not-found');
    expect(problemOf(await world.stranger.get(`/packs?categoryId=${world.categoryId}`)).type).toBe(
      '/problems/not-found',
    );
    const { packs } = await listPacks(world.finance);
    expect(problemOf(await world.stranger.get(`/packs/${packs[0]!.id}/file`)).type).toBe('/problems/not-found');
    expect(problemOf(await world.finance.get('/packs/999999/file')).type).toBe('/problems/not-found');
  });

  it('takes locked weeks only, and says what to do otherwise', async () => {
    const open = await world.finance.post(
      '/packs',
      bodyOf({ firstWeek: weekAt(locked, 5), lastWeek: weekAt(locked, 6) }),
    );
    expect(problemOf(open)).toMatchObject({ type: '/problems/wrong-state', status: 409 });
    const turned = await world.finance.post(
      '/packs',
      bodyOf({ firstWeek: weekAt(locked, 3), lastWeek: weekAt(locked, 0) }),
    );
    expect(problemOf(turned).status).toBe(422);
    const foreign = await world.finance.post('/packs', bodyOf({ lineIds: [999_999] }));
    expect(problemOf(foreign).status).toBe(404);
  });

  it('leaves nothing behind when the last step fails', async () => {
    const before = (await listPacks(world.finance)).packs.length;
    const count = async () =>
      (await world.deps.database.pool.query<{ n: number }>('select count(*)::int as n from stored_file')).rows[0]!.n;
    const files = await count();
    await asOwner(
      world,
      `create function fail_audit() returns trigger language plpgsql as $$ begin raise exception 'disk gone'; end $$;
       create trigger fail_audit before insert on audit_entry for each row when (new.action = 'build-pack') execute function fail_audit()`,
    );
    try {
      const job = await build(world.finance);
      expect(job).toMatchObject({ state: 'failed', problem: { type: 'unexpected' } });
    } finally {
      await asOwner(world, 'drop trigger fail_audit on audit_entry; drop function fail_audit()');
    }
    expect((await listPacks(world.finance)).packs).toHaveLength(before);
    expect(await count()).toBe(files);
  });

  it('keeps its version though the line is unlocked and changed afterwards', async () => {
    const [pack] = (await listPacks(world.finance)).packs;
    const before = await fetchFile(world.finance, pack!.id);
    const answer = await world.lead.post(`/plan/lines/${world.lineId}/unlock`, {
      firstWeek: weekAt(locked, 0),
      lastWeek: weekAt(locked, 3),
      reason: 'supplier is short',
    });
    expect(answer.status, answer.text).toBe(200);
    const plan = await readPlan(world.planner, world.lineId);
    savedOf(
      await save(world.planner, world.lineId, plan.version!.number, [override(world, plan, { week: 2, value: 9 })]),
    );
    expect((await fetchFile(world.finance, pack!.id)).equals(before)).toBe(true);
    expect(problemOf(await world.finance.post('/packs', bodyOf())).type).toBe('/problems/wrong-state');
  });
});

import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { LinePlan } from '../../../shared/contracts/plan.ts';
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
  readVersion,
  save,
  savedOf,
  submitAndLock,
  weekAt,
  type PersonAtApi,
  type PlanWorld,
} from './plan-world.ts';

let world: PlanWorld;
let plan: LinePlan;

beforeEach(async () => {
  world = await makePlanWorld({ items: 2, locations: 1 });
  await forecast(world);
  plan = await readPlan(world.planner, world.lineId);
});
afterEach(() => world.close());

type Step = 'submit' | 'return' | 'lock' | 'unlock';
const bodyOf = (step: Step, version = 1): object => {
  const weeks = { firstWeek: weekAt(plan, 0), lastWeek: weekAt(plan, 3) };
  return {
    submit: { version, comment: 'ready' },
    return: { comment: 'look at week one again' },
    lock: { version, ...weeks, comment: null },
    unlock: { ...weeks, reason: 'supplier is short' },
  }[step];
};
const take = (person: PersonAtApi, step: Step, version?: number) =>
  person.post(`/plan/lines/${world.lineId}/${step}`, bodyOf(step, version));
async function taken(person: PersonAtApi, step: Step, version?: number): Promise<LinePlan> {
  const answer = await take(person, step, version);
  expect(answer.status, answer.text).toBe(200);
  return LinePlan.parse(answer.body);
}
async function mails(): Promise<{ kind: string; recipient: number; payload: Record<string, unknown> }[]> {
  const { rows } = await world.deps.database.pool.query(
    'select kind, recipient_id as recipient, payload from mail_outbox order by id',
  );
  return rows;
}

describe('draft → submitted → locked', () => {
  it('runs from the planner over the lead to the lock, and tells whom it concerns', async () => {
    const submitted = await taken(world.planner, 'submit');
    expect(submitted).toMatchObject({
      state: 'submitted',
      handOver: { state: 'submitted', version: 1, actor: 'Pia Planner', comment: 'ready' },
      may: { override: false, submit: false, lock: false },
    });
    expect((await readPlan(world.lead, world.lineId)).may).toMatchObject({
      override: true,
      returnLine: true,
      lock: true,
    });
    expect(await mails()).toEqual([
      {
        kind: 'line-submitted',
        recipient: world.lead.actor.id,
        payload: expect.objectContaining({ lineId: world.lineId, version: 1 }),
      },
    ]);

    const blocked = await save(world.planner, world.lineId, 1, [override(world, plan, {})]);
    expect(problemOf(blocked)).toMatchObject({ type: '/problems/plan-submitted', status: 409 });
    const adjusted = savedOf(await save(world.lead, world.lineId, 1, [override(world, plan, { value: 70 })]));
    expect(adjusted.version).toMatchObject({ number: 2, kind: 'adjustment', author: 'Lea Lead' });
    expect((await readPlan(world.lead, world.lineId)).state).toBe('submitted');

    expect(problemOf(await take(world.lead, 'lock', 1)).detail).toContain('version 2');
    const partly = await taken(world.lead, 'lock', 2);
    expect(partly.state).toBe('submitted');
    expect(partly.lockedWeeks).toEqual([0, 1, 2, 3].map((week) => weekAt(plan, week)));
    expect(partly.locks).toEqual([
      { firstWeek: weekAt(plan, 0), lastWeek: weekAt(plan, 3), version: 2, actor: 'Lea Lead', at: expect.any(String) },
    ]);
    const whole = await world.lead.post(`/plan/lines/${world.lineId}/lock`, {
      version: 2,
      firstWeek: weekAt(plan, 0),
      lastWeek: weekAt(plan, 7),
      comment: null,
    });
    expect(LinePlan.parse(whole.body)).toMatchObject({
      state: 'locked',
      may: { override: false, unlock: true, lock: false },
    });
    const told = (await mails()).filter(({ kind }) => kind === 'line-locked').map(({ recipient }) => recipient);
    expect(new Set(told)).toEqual(
      new Set([world.planner, world.colleague, world.finance].map(({ actor }) => actor.id)),
    );
  });

  it('goes back to draft by a return, whose comment the submitter gets', async () => {
    await taken(world.planner, 'submit');
    const returned = await taken(world.lead, 'return');
    expect(returned).toMatchObject({
      state: 'draft',
      handOver: { state: 'returned', comment: 'look at week one again' },
    });
    expect((await mails()).at(-1)).toMatchObject({ kind: 'line-returned', recipient: world.planner.actor.id });
    savedOf(await save(world.planner, world.lineId, 1, [override(world, plan, {})]));
    await taken(world.planner, 'submit', 2);
  });

  it('goes back to draft by an unlock, with its reason, and the numbers stay', async () => {
    savedOf(await save(world.planner, world.lineId, 1, [override(world, plan, { value: 64 })]));
    const locked = await submitAndLock(world, 0, 7);
    const opened = await taken(world.lead, 'unlock');
    expect(opened).toMatchObject({ state: 'draft', handOver: null, version: { number: 2 } });
    expect(opened.lockedWeeks).toEqual([4, 5, 6, 7].map((week) => weekAt(plan, week)));
    expect(numbersOf(opened)).toEqual(numbersOf(locked));
    const { rows } = await world.deps.database.pool.query('select locked, reason, version from lock_event order by id');
    expect(rows).toEqual([
      { locked: true, reason: null, version: 2 },
      { locked: false, reason: 'supplier is short', version: 2 },
    ]);
    expect((await mails()).filter(({ kind }) => kind === 'line-unlocked')).toHaveLength(3);
    savedOf(await save(world.planner, world.lineId, 2, [override(world, plan, { value: 65 })]));
  });

  it('lapses with a new forecast', async () => {
    await taken(world.planner, 'submit');
    await forecast(world);
    expect(await readPlan(world.planner, world.lineId)).toMatchObject({
      state: 'draft',
      handOver: { state: 'lapsed', version: 2 },
    });
    expect(problemOf(await take(world.lead, 'lock', 2)).type).toBe('/problems/wrong-state');
  });
});

describe('refused, with nothing written', () => {
  async function expectRefusal(person: PersonAtApi, step: Step, type: string, status: number, version?: number) {
    const counted = await countWritten(world);
    expect(problemOf(await take(person, step, version)), step).toMatchObject({ type: `/problems/${type}`, status });
    expect(await countWritten(world)).toEqual(counted);
  }

  it('to a stranger as not found, to others as not allowed', async () => {
    for (const step of ['submit', 'return', 'lock', 'unlock'] as const) {
      await expectRefusal(world.stranger, step, 'not-found', 404);
      for (const person of [world.viewer, world.finance]) await expectRefusal(person, step, 'not-allowed', 403);
    }
    for (const step of ['return', 'lock', 'unlock'] as const)
      await expectRefusal(world.planner, step, 'not-allowed', 403);
  });

  it('in the wrong state', async () => {
    for (const step of ['return', 'lock', 'unlock'] as const) await expectRefusal(world.lead, step, 'wrong-state', 409);
    await expectRefusal(world.planner, 'submit', 'wrong-state', 409, 7);
    await taken(world.planner, 'submit');
    await expectRefusal(world.planner, 'submit', 'wrong-state', 409);
    await submitAndLockOnly();
    await expectRefusal(world.lead, 'lock', 'wrong-state', 409);
  });

  async function submitAndLockOnly(): Promise<void> {
    await taken(world.lead, 'lock');
  }

  it('for weeks that aren’t planned', async () => {
    await taken(world.planner, 'submit');
    const answer = await world.lead.post(`/plan/lines/${world.lineId}/lock`, {
      version: 1,
      firstWeek: weekAt(plan, 2),
      lastWeek: weekAt(plan, 8),
      comment: null,
    });
    expect(problemOf(answer)).toMatchObject({ status: 422, errors: [{ pointer: '/lastWeek' }] });
  });

  it('when the outbox or the log can’t be written', async () => {
    await asOwner(
      world,
      `create function fail_late() returns trigger language plpgsql as $$ begin raise exception 'disk full'; end $$;
       create trigger fail_late before insert on mail_outbox for each row execute function fail_late();`,
    );
    await expectRefusal(world.planner, 'submit', 'unexpected', 500);
    await asOwner(world, 'alter table mail_outbox disable trigger fail_late');
    await taken(world.planner, 'submit');
    await asOwner(world, 'alter table mail_outbox enable trigger fail_late');
    await expectRefusal(world.lead, 'return', 'unexpected', 500);
    await expectRefusal(world.lead, 'lock', 'unexpected', 500);
    await asOwner(world, 'alter table mail_outbox disable trigger fail_late');
    await taken(world.lead, 'lock');
    await asOwner(world, 'alter table mail_outbox enable trigger fail_late');
    await expectRefusal(world.lead, 'unlock', 'unexpected', 500);
  });

  it('before the first forecast', async () => {
    const { rows } = await world.deps.database.pool.query<{ id: number }>(
      `insert into product_line (category_id, name) values ($1, 'New line') returning id`,
      [world.categoryId],
    );
    const answer = await world.planner.post(`/plan/lines/${rows[0]!.id}/submit`, { version: 1, comment: null });
    expect(problemOf(answer)).toMatchObject({ type: '/problems/no-forecast', status: 409 });
  });
});

describe('locks', () => {
  it('let no save through after them in 50 races', async () => {
    let savedFirst = 0;
    let lockedFirst = 0;
    for (let race = 0; race < 50; race += 1) {
      const before = await readPlan(world.planner, world.lineId);
      const version = before.version!.number;
      expect((await take(world.planner, 'submit', version)).status).toBe(200);
      const edits = [override(world, before, { scope: lineScope, week: race % 4, value: 50 + race })];
      const pause = (milliseconds: number) => new Promise((resolve) => setTimeout(resolve, milliseconds));
      const [saved, locked] = await Promise.all([
        pause(race % 5).then(() => save(world.lead, world.lineId, version, edits)),
        pause((race * 3) % 7).then(() => take(world.lead, 'lock', version)),
      ]);
      if (locked.status === 200) {
        lockedFirst += 1;
        expect(problemOf(saved).type).toBe('/problems/plan-locked');
        const after = await readPlan(world.planner, world.lineId);
        expect(numbersOf(after)).toEqual(numbersOf(before));
        expect(after.version!.number).toBe(version);
        await taken(world.lead, 'unlock');
      } else {
        savedFirst += 1;
        expect(saved.status).toBe(200);
        expect(problemOf(locked).type).toBe('/problems/wrong-state');
        expect((await readPlan(world.planner, world.lineId)).lockedWeeks).toEqual([]);
        await taken(world.lead, 'return');
      }
    }
    expect(savedFirst + lockedFirst).toBe(50);
    const { rows } = await world.deps.database.pool.query(
      `select count(*)::int as writes from plan_version v join override o on o.version_id = v.id
       join lock_event k on k.line_id = v.line_id and k.locked and k.at < v.at and o.first_week between k.first_week and k.last_week
       where not exists (select from lock_event u where u.line_id = k.line_id and not u.locked and u.at between k.at and v.at)`,
    );
    expect(rows[0]).toEqual({ writes: 0 });
  }, 300_000);

  it('hold against a new forecast, shorter and on newer sales', async () => {
    savedOf(await save(world.planner, world.lineId, 1, [override(world, plan, { week: 1, lastWeek: 5, value: 500 })]));
    const locked = await submitAndLock(world, 1, 5);
    await world.deps.database.pool.query('update sales_week set units = units * 3');
    await world.deps.database.pool.query(
      `insert into sales_week (item_id, location_id, week_start, import_id, revision_id, units, price, regular_price)
       select item_id, location_id, week_start + 7, import_id, revision_id, units, price, regular_price from sales_week
       where week_start = (select max(week_start) from sales_week)`,
    );
    await forecast(world, 4);
    const after = await readPlan(world.planner, world.lineId);
    expect(after.planFirstWeek).toBe(weekAt(plan, 1));
    // Four weeks were asked for; the locked ones reach further.
    expect(after.planWeeks).toBe(5);
    expect(after.lockedWeeks).toEqual([1, 2, 3, 4, 5].map((week) => weekAt(plan, week)));
    for (const [index, series] of after.series.entries()) {
      expect(series.plan).toEqual(locked.series[index]!.plan.slice(1, 6));
      expect(series.model).not.toEqual(locked.series[index]!.model.slice(1, 6));
    }
    expect(await readVersion(world.planner, world.lineId, 3)).toMatchObject({
      planFirstWeek: weekAt(plan, 1),
      series: after.series.map(({ itemId, locationId, plan: numbers }) => ({ itemId, locationId, plan: numbers })),
    });
  });

  it('keep the number of an item that has left the line', async () => {
    const locked = await submitAndLock(world, 0, 1);
    await world.deps.database.pool.query('update item_membership set valid_to = $2 where item_id = $1', [
      world.itemIds[0],
      weekAt(plan, -10),
    ]);
    await forecast(world);
    const after = await readPlan(world.planner, world.lineId);
    expect(after.series[0]).toMatchObject({ itemId: world.itemIds[0], method: 'not-listed' });
    expect(after.series[0]!.plan).toEqual([...locked.series[0]!.plan.slice(0, 2), 0, 0, 0, 0, 0, 0]);
  });

  it('give way to the present model when they are opened, in a version under the name of who opened them', async () => {
    await submitAndLock(world, 0, 3);
    await world.deps.database.pool.query('update sales_week set units = units * 3');
    await forecast(world);
    const held = await readPlan(world.planner, world.lineId);
    const opened = await taken(world.lead, 'unlock');
    expect(opened.version).toMatchObject({
      number: held.version!.number + 1,
      kind: 'adjustment',
      author: 'Lea Lead',
      note: 'supplier is short',
    });
    for (const series of opened.series) expect(series.plan).toEqual(series.model);
    expect(numbersOf(await readVersion(world.planner, world.lineId, held.version!.number))).toEqual(numbersOf(held));
    expect(numbersOf(await readVersion(world.planner, world.lineId, opened.version!.number))).toEqual(
      numbersOf(opened),
    );
  });
});

import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { CellConflict, type LinePlan, type NewOverride } from '../../../shared/contracts/plan.ts';
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
  type PlanWorld,
} from './plan-world.ts';

let world: PlanWorld;
let plan: LinePlan;

beforeAll(async () => {
  world = await makePlanWorld();
  await forecast(world);
});
afterAll(() => world.close());
beforeEach(async () => {
  plan = await readPlan(world.planner, world.lineId);
});

const newest = (): number => plan.version!.number;
const cellAt = (index: number) => ({
  itemId: plan.series[index]!.itemId,
  locationId: plan.series[index]!.locationId,
});
const change = (given: Parameters<typeof override>[2]): NewOverride => override(world, plan, given);

describe('a save', () => {
  it('makes one version and answers with the numbers that the page then reads', async () => {
    const saved = savedOf(
      await save(world.planner, world.lineId, newest(), [
        change({ scope: cellAt(0), week: 1, value: 77 }),
        change({ week: 2, lastWeek: 3, operation: 'scale by', value: 1.5 }),
      ]),
    );
    expect(saved.version).toMatchObject({
      number: newest() + 1,
      parent: newest(),
      kind: 'overrides',
      author: 'Pia Planner',
      reason: 'Display agreed',
      note: 'agreed on the phone',
    });
    const after = await readPlan(world.planner, world.lineId);
    expect(after.version).toEqual(saved.version);
    expect(after.overrides).toEqual(saved.overrides);
    expect(after.series[0]!.plan[1]).toBe(77);
    expect(sumPlan(after)[2]).toBe(Math.floor(sumPlan(plan)[2]! * 1.5 + 0.5));
    const answered = Object.fromEntries(saved.changed.map((row) => [`${row.itemId}/${row.locationId}`, row.plan]));
    expect({ ...numbersOf(plan), ...answered }).toEqual(numbersOf(after));
  });

  it('leaves a trace with who, what and why', async () => {
    await save(world.planner, world.lineId, newest(), [change({ scope: cellAt(1), value: 55 })]);
    const { rows } = await world.deps.database.pool.query(
      `select actor_id, action, subject, category_id, new, why from audit_entry order by id desc limit 1`,
    );
    expect(rows[0]).toMatchObject({
      actor_id: world.planner.actor.id,
      action: 'save-overrides',
      subject: `line:${world.lineId}`,
      category_id: world.categoryId,
      new: { version: newest() + 1, overrides: 1 },
      why: 'Display agreed: agreed on the phone',
    });
  });

  it('may change nothing', async () => {
    const saved = savedOf(
      await save(world.planner, world.lineId, newest(), [
        change({ scope: cellAt(2), week: 5, operation: 'clear', value: null, reasonId: null, note: null }),
      ]),
    );
    expect(saved.version.changedCells).toBe(0);
    expect(saved.changed).toEqual([]);
  });

  it('clears what was set before, and only there', async () => {
    const scope = cellAt(3);
    const model = plan.series[3]!.model;
    const set = savedOf(
      await save(world.planner, world.lineId, newest(), [change({ scope, week: 4, lastWeek: 5, value: 9 })]),
    );
    const cleared = savedOf(
      await save(world.planner, world.lineId, set.version.number, [
        change({ scope, week: 4, operation: 'clear', value: null, reasonId: null, note: null }),
      ]),
    );
    expect(cleared.changed).toHaveLength(1);
    expect(cleared.changed[0]!.plan.slice(4, 6)).toEqual([model[4], 9]);
    const { rows } = await world.deps.database.pool.query(`select clears from override order by id desc limit 1`);
    expect(rows[0].clears).toEqual([set.overrides.at(-1).id]);
  });
});

describe('two people', () => {
  it('keep both edits when they change different cells', async () => {
    const base = newest();
    savedOf(await save(world.planner, world.lineId, base, [change({ scope: cellAt(0), week: 6, value: 61 })]));
    const second = savedOf(
      await save(world.colleague, world.lineId, base, [change({ scope: cellAt(1), week: 6, value: 62 })]),
    );
    expect(second.version.parent).toBe(base + 1);
    const after = await readPlan(world.planner, world.lineId);
    expect([after.series[0]!.plan[6], after.series[1]!.plan[6]]).toEqual([61, 62]);
    expect(Object.fromEntries(second.changed.map((row) => [`${row.itemId}/${row.locationId}`, row.plan]))).toEqual(
      numbersOf(after),
    );
  });

  it('are shown both values when they change the same cell, and nothing is written', async () => {
    const base = newest();
    const before = plan.series[2]!.plan[7]!;
    savedOf(
      await save(world.planner, world.lineId, base, [change({ scope: cellAt(2), week: 7, value: 71, note: 'first' })]),
    );
    const counted = await countWritten(world);
    const refused = await save(world.colleague, world.lineId, base, [
      change({ scope: cellAt(2), week: 7, value: 72 }),
      change({ scope: cellAt(4), week: 7, value: 73 }),
    ]);
    const problem = problemOf(refused);
    expect(problem).toMatchObject({ status: 409, type: '/problems/stale-cells' });
    expect(problem.conflicts!.map((conflict) => CellConflict.parse(conflict))).toEqual([
      expect.objectContaining({
        scope: cellAt(2),
        weekStart: weekAt(plan, 7),
        yours: 72,
        theirs: 71,
        before,
        theirAuthor: 'Pia Planner',
        theirNote: 'first',
        theirVersion: base + 1,
      }),
    ]);
    expect(await countWritten(world)).toEqual(counted);
    const settled = savedOf(
      await save(world.colleague, world.lineId, base + 1, [change({ scope: cellAt(2), week: 7, value: 72 })]),
    );
    expect(settled.version.number).toBe(base + 2);
  });

  it('clash where one changes a total over the other’s cell, or a cell under the other’s total', async () => {
    const base = newest();
    const { itemId } = cellAt(0);
    savedOf(
      await save(world.planner, world.lineId, base, [
        change({ scope: { itemId, locationId: null }, week: 3, value: 90 }),
      ]),
    );
    for (const scope of [cellAt(0), lineScope, { itemId: null, locationId: cellAt(0).locationId }]) {
      const refused = await save(world.colleague, world.lineId, base, [change({ scope, week: 3, value: 400 })]);
      expect(problemOf(refused).type).toBe('/problems/stale-cells');
    }
    savedOf(await save(world.colleague, world.lineId, base, [change({ scope: cellAt(2), week: 3, value: 41 })]));
  });

  it('never clash with their own earlier saves', async () => {
    const base = newest();
    savedOf(await save(world.planner, world.lineId, base, [change({ scope: cellAt(5), week: 2, value: 21 })]));
    savedOf(await save(world.planner, world.lineId, base, [change({ scope: cellAt(5), week: 2, value: 22 })]));
    expect((await readPlan(world.planner, world.lineId)).series[5]!.plan[2]).toBe(22);
  });

  it('lose nothing in 10 people × 20 saves at once', async () => {
    const crowded = await makePlanWorld({ items: 5, locations: 2 });
    try {
      await forecast(crowded, 26);
      const start = await readPlan(crowded.planner, crowded.lineId);
      const people = await Promise.all(
        Array.from({ length: 10 }, (_, person) => crowded.enter('planner', crowded.categoryId, `Planner ${person}`)),
      );
      let refused = 0;
      const kept = new Map<string, number>();
      await Promise.all(
        people.map(async (who, person) => {
          for (let round = 0; round < 20; round += 1) {
            // Half of the saves hit cells that only this person touches, half hit cells of everybody.
            const isShared = round % 2 === 1;
            const series = start.series[isShared ? round % 10 : person]!;
            const week = isShared ? 25 : round;
            const value = 1_000 + person * 100 + round;
            const answer = await save(who, crowded.lineId, start.version!.number, [
              override(crowded, start, {
                scope: { itemId: series.itemId, locationId: series.locationId },
                week,
                value,
              }),
            ]);
            if (answer.status === 409) {
              expect(problemOf(answer).conflicts!.length).toBeGreaterThan(0);
              refused += 1;
            } else {
              const saved = savedOf(answer);
              kept.set(`${saved.version.number}`, value);
            }
          }
        }),
      );
      expect(kept.size + refused).toBe(200);
      expect(refused).toBeGreaterThan(0);
      const { rows } = await crowded.deps.database.pool.query<{ number: string; value: number }>(
        `select v.number::text, o.value from plan_version v join override o on o.version_id = v.id where v.line_id = $1`,
        [crowded.lineId],
      );
      expect(new Map(rows.map(({ number, value }) => [number, value]))).toEqual(kept);
      const end = await readPlan(crowded.planner, crowded.lineId);
      for (let person = 0; person < 10; person += 1) {
        for (let round = 0; round < 20; round += 2) {
          expect(end.series[person]!.plan[round]).toBe(1_000 + person * 100 + round);
        }
      }
    } finally {
      await crowded.close();
    }
  }, 300_000);
});

describe('a save is refused and nothing is written', () => {
  async function expectRefusal(answer: Promise<Awaited<ReturnType<typeof save>>>, type: string, status: number) {
    const counted = await countWritten(world);
    const before = numbersOf(await readPlan(world.planner, world.lineId));
    const problem = problemOf(await answer);
    expect(problem).toMatchObject({ type: `/problems/${type}`, status });
    expect(await countWritten(world)).toEqual(counted);
    expect(numbersOf(await readPlan(world.planner, world.lineId))).toEqual(before);
    return problem;
  }

  it('for a stranger as if the line didn’t exist, for a viewer and finance as not allowed', async () => {
    const edits = [change({ scope: cellAt(0) })];
    await expectRefusal(save(world.stranger, world.lineId, newest(), edits), 'not-found', 404);
    await expectRefusal(save(world.planner, 999_999, newest(), edits), 'not-found', 404);
    await expectRefusal(save(world.viewer, world.lineId, newest(), edits), 'not-allowed', 403);
    await expectRefusal(save(world.finance, world.lineId, newest(), edits), 'not-allowed', 403);
  });

  it('with a pointer to each thing that can’t be used', async () => {
    const problem = await expectRefusal(
      save(world.planner, world.lineId, newest() + 5, [
        { ...change({ scope: cellAt(0) }), firstWeek: '2026-01-01', lastWeek: '2026-01-01' },
        change({ scope: { itemId: 999_999, locationId: null } }),
        change({ value: -1 }),
        change({ reasonId: null }),
        change({ reasonId: 999_999 }),
        change({ operation: 'clear', value: 3 }),
        change({ week: 3, lastWeek: 1 }),
        change({ week: 300 }),
      ]),
      'invalid-request',
      422,
    );
    expect(problem.errors!.map(({ pointer }) => pointer)).toEqual([
      '/baseVersion',
      '/overrides/0/firstWeek',
      '/overrides/0/lastWeek',
      '/overrides/1/scope',
      '/overrides/2/value',
      '/overrides/3/reasonId',
      '/overrides/4/reasonId',
      '/overrides/5/value',
      '/overrides/6/lastWeek',
      '/overrides/7/firstWeek',
      '/overrides/7/lastWeek',
    ]);
  });

  it('without a note past the threshold, and only then', async () => {
    const problem = await expectRefusal(
      save(world.planner, world.lineId, newest(), [change({ operation: 'scale by', value: 1.3, note: null })]),
      'invalid-request',
      422,
    );
    expect(problem.errors).toEqual([{ pointer: '/overrides/0/note', detail: expect.any(String) }]);
    savedOf(
      await save(world.planner, world.lineId, newest(), [change({ operation: 'scale by', value: 1.2, note: null })]),
    );
  });

  it('where a number would grow past what a plan can hold', async () => {
    for (const edit of [change({ value: 1e12 }), change({ operation: 'scale by', value: 1e6 })]) {
      const answer = save(world.planner, world.lineId, newest(), [edit]);
      expect((await expectRefusal(answer, 'invalid-request', 422)).errors).toEqual([
        { pointer: '/overrides/0/value', detail: 'is too large' },
      ]);
    }
    const factors = Array.from({ length: 5 }, () => change({ operation: 'scale by', value: 900 }));
    await expectRefusal(save(world.planner, world.lineId, newest(), factors), 'cannot-spread', 422);
  });

  it('with the reason where a total can’t be met', async () => {
    const { itemId, locationId } = cellAt(0);
    const problem = await expectRefusal(
      save(world.planner, world.lineId, newest(), [
        change({ scope: { itemId, locationId }, week: 1, value: 80 }),
        change({ scope: { itemId, locationId: null }, week: 1, value: 50 }),
      ]),
      'cannot-spread',
      422,
    );
    expect(problem.errors).toEqual([
      { pointer: '/overrides/1', detail: expect.stringContaining('leave no way to meet it') },
    ]);
    await expectRefusal(
      save(world.planner, world.lineId, newest(), [change({ operation: 'add', value: -1_000_000 })]),
      'cannot-spread',
      422,
    );
  });

  it('when the database fails at the last step', async () => {
    await asOwner(
      world,
      `create function fail_late() returns trigger language plpgsql as $$ begin raise exception 'disk full'; end $$;
       create trigger fail_late before insert on audit_entry for each row execute function fail_late();`,
    );
    try {
      await expectRefusal(
        save(world.planner, world.lineId, newest(), [change({ scope: cellAt(0), value: 5 })]),
        'unexpected',
        500,
      );
    } finally {
      await asOwner(world, 'drop trigger fail_late on audit_entry; drop function fail_late();');
    }
  });

  it('where a week is locked, also as part of a range', async () => {
    const locked = await submitAndLock(world, 0, 1);
    expect(locked.lockedWeeks).toEqual([weekAt(plan, 0), weekAt(plan, 1)]);
    plan = await readPlan(world.planner, world.lineId);
    const returned = await world.lead.post(`/plan/lines/${world.lineId}/return`, { comment: 'go on with the rest' });
    expect(returned.status).toBe(200);
    await expectRefusal(
      save(world.planner, world.lineId, newest(), [change({ scope: cellAt(0), week: 1 })]),
      'plan-locked',
      409,
    );
    await expectRefusal(
      save(world.lead, world.lineId, newest(), [change({ week: 1, lastWeek: 4, value: 5_000 })]),
      'plan-locked',
      409,
    );
    savedOf(await save(world.planner, world.lineId, newest(), [change({ scope: cellAt(0), week: 2 })]));
  });
});

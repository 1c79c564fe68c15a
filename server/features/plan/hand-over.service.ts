import type { z } from 'zod';
import type { LineState, LockLine, ReturnLine, Round, SubmitLine, UnlockLine } from '../../../shared/contracts/plan.ts';
import { toDayNumber, weekLabel } from '../../../shared/domain/weeks.ts';
import { writeAudit } from '../../lib/audit.ts';
import { demandRight, type Actor } from '../../lib/authorise.ts';
import { inTransaction, type Database, type Tx } from '../../lib/database.ts';
import { ProblemError } from '../../lib/problem.ts';
import { deriveLineState, joinWeeks, lockedPlanWeeks, plannedWeeks } from './line-state.ts';
import { demandLockedLine, demandNewestVersion, demandPlanned, type PlannedHead } from './plan-access.ts';
import { comparePlans, replayState } from './plan-state.ts';
import {
  insertHandOvers,
  insertLockEvents,
  insertMails,
  insertVersion,
  snapshotEvery,
} from './plan-writing.repository.ts';
import * as repository from './plan.repository.ts';

const stateWords: Readonly<Record<LineState, string>> = {
  draft: 'a draft',
  submitted: 'submitted',
  locked: 'locked',
};

function demandState(head: PlannedHead, wanted: LineState, advice: string): void {
  const state = deriveLineState(head);
  if (state !== wanted) {
    throw new ProblemError(
      'wrong-state',
      `${head.line.name} is ${stateWords[state]}, not ${stateWords[wanted]}. ${advice}`,
    );
  }
}

function demandRound(head: PlannedHead): Round {
  if (!head.round)
    throw new ProblemError('no-forecast', `${head.category.name} has no open round. Generate a forecast first.`);
  return head.round;
}

/** Hands a draft over to the category lead, who is told by mail. The version must be the newest. */
export function submitLine(
  database: Database,
  actor: Actor,
  lineId: number,
  { version, comment }: z.infer<typeof SubmitLine>,
): Promise<void> {
  return inTransaction(database, async (tx) => {
    const head = demandPlanned(await demandLockedLine(tx, actor, lineId, 'submit-line'));
    demandState(head, 'draft', 'There is nothing to submit.');
    demandNewestVersion(head, version);
    if (lockedPlanWeeks(head).length === plannedWeeks(head).length) {
      throw new ProblemError(
        'plan-locked',
        `All planned weeks of ${head.line.name} are locked; there is nothing to submit.`,
      );
    }
    await handOver(tx, actor, head, 'submitted', comment);
    const leads = await repository.listPeopleInRoles(tx, head.category.id, ['category-lead']);
    await tell(tx, actor, head, 'line-submitted', leads, { version, comment });
  });
}

/** Gives a submitted line back to draft; who submitted it and who wrote its newest version are told by mail. */
export function returnLine(
  database: Database,
  actor: Actor,
  lineId: number,
  { comment }: z.infer<typeof ReturnLine>,
): Promise<void> {
  return inTransaction(database, async (tx) => {
    const head = demandPlanned(await demandLockedLine(tx, actor, lineId, 'return-line'));
    demandState(head, 'submitted', 'Only submitted lines can be returned.');
    await handOver(tx, actor, head, 'returned', comment);
    await tell(tx, actor, head, 'line-returned', [head.handOver?.actorId ?? null, head.versionAuthorId], {
      version: head.version.number,
      comment,
    });
  });
}

/** Locks weeks of a submitted line at its newest version; planners and finance are told by mail. Weeks that are locked already stay as they are. */
export function lockLine(
  database: Database,
  actor: Actor,
  lineId: number,
  { version, firstWeek, lastWeek, comment }: z.infer<typeof LockLine>,
): Promise<void> {
  return inTransaction(database, async (tx) => {
    const head = demandPlanned(await demandLockedLine(tx, actor, lineId, 'lock-line'));
    demandState(head, 'submitted', 'Only submitted lines can be locked.');
    demandNewestVersion(head, version);
    const named = demandPlannedRange(head, firstWeek, lastWeek);
    const locked = new Set(lockedPlanWeeks(head));
    const open = named.filter((week) => !locked.has(week));
    if (open.length === 0)
      throw new ProblemError('wrong-state', 'All of these weeks are locked already. Choose others.');
    const ranges = joinWeeks(open);
    await insertLockEvents(tx, { lineId, locked: true, version, actorId: actor.id, reason: comment }, ranges);
    await writeAudit(tx, {
      actor,
      action: 'lock-line',
      subject: `line:${lineId}`,
      categoryId: head.category.id,
      new: { version, ranges },
      why: comment,
    });
    const told = await repository.listPeopleInRoles(tx, head.category.id, ['planner', 'finance']);
    await tell(tx, actor, head, 'line-locked', told, { version, firstWeek, lastWeek, comment });
  });
}

/**
 * Opens locked weeks again; the line is a draft then. Where the numbers that the lock held differ from the present model with its overrides, the latter
 * are saved as a version at once, so that the change carries the name of who unlocked.
 */
export function unlockLine(
  database: Database,
  actor: Actor,
  lineId: number,
  { firstWeek, lastWeek, reason }: z.infer<typeof UnlockLine>,
): Promise<void> {
  return inTransaction(database, async (tx) => {
    const head = demandPlanned(await demandLockedLine(tx, actor, lineId, 'unlock-line'));
    const named = new Set(demandPlannedRange(head, firstWeek, lastWeek));
    const locked = lockedPlanWeeks(head);
    const opened = locked.filter((week) => named.has(week));
    if (opened.length === 0) {
      throw new ProblemError('wrong-state', `None of these weeks of ${head.line.name} is locked. Choose locked ones.`);
    }
    const ranges = joinWeeks(opened);
    await insertLockEvents(
      tx,
      { lineId, locked: false, version: head.version.number, actorId: actor.id, reason },
      ranges,
    );
    const version = await saveOpened(
      tx,
      actor,
      head,
      locked.filter((week) => !named.has(week)),
      reason,
    );
    await writeAudit(tx, {
      actor,
      action: 'unlock-line',
      subject: `line:${lineId}`,
      categoryId: head.category.id,
      new: { version, ranges },
      why: reason,
    });
    const told = await repository.listPeopleInRoles(tx, head.category.id, ['planner', 'finance']);
    await tell(tx, actor, head, 'line-unlocked', told, { version, firstWeek, lastWeek, comment: reason });
  });
}

async function saveOpened(
  tx: Tx,
  actor: Actor,
  head: PlannedHead,
  lockedWeeks: readonly string[],
  reason: string,
): Promise<number> {
  const { run, line } = head;
  const window = { firstWeek: run.firstWeek, weeks: run.weeks };
  const series = await repository.listPlanSeries(tx, [line.id]);
  const before = series.map(({ plan }) => plan);
  const overrides = await repository.listOverrides(tx, [line.id], run.firstWeek);
  const { plan } = replayState({ window, series, overrides, lockedWeeks, lockedPlan: before });
  const { changedCells, changedUnits, changedSeries } = comparePlans(before, plan);
  if (changedCells === 0) return head.version.number;
  const number = head.version.number + 1;
  const rowAt = (index: number) => ({
    itemId: series[index]!.itemId,
    locationId: series[index]!.locationId,
    plan: plan[index]!,
  });
  await insertVersion(
    tx,
    {
      lineId: line.id,
      number,
      parent: head.version.number,
      runId: run.id,
      kind: 'adjustment',
      authorId: actor.id,
      reason: null,
      note: reason,
      heldWeeks: lockedWeeks,
      changedCells,
      changedUnits,
    },
    {
      firstWeek: run.firstWeek,
      overrides: [],
      changed: changedSeries.map(rowAt),
      snapshot: number % snapshotEvery === 0 ? series.map((_, index) => rowAt(index)) : null,
    },
  );
  return number;
}

function demandPlannedRange(head: PlannedHead, firstWeek: string, lastWeek: string): string[] {
  const planned = plannedWeeks(head);
  const first = planned.indexOf(firstWeek);
  const last = planned.indexOf(lastWeek);
  if (first >= 0 && last >= first) return planned.slice(first, last + 1);
  const span = `${weekLabel(planned[0] ?? firstWeek)} to ${weekLabel(planned.at(-1) ?? lastWeek)}`;
  throw new ProblemError('invalid-request', `Choose planned weeks, ${span}, the first before the last.`, {
    errors: [
      first < 0
        ? { pointer: '/firstWeek', detail: `must be a planned week, ${span}` }
        : { pointer: '/lastWeek', detail: `must be a planned week, ${span}, not before firstWeek` },
    ],
  });
}

async function handOver(
  tx: Tx,
  actor: Actor,
  head: PlannedHead,
  state: 'submitted' | 'returned',
  comment: string | null,
): Promise<void> {
  const version = head.version.number;
  await insertHandOvers(tx, [
    {
      lineId: head.line.id,
      roundId: demandRound(head).id,
      state,
      version,
      actorId: actor.id,
      comment: comment || null,
    },
  ]);
  await writeAudit(tx, {
    actor,
    action: state === 'submitted' ? 'submit-line' : 'return-line',
    subject: `line:${head.line.id}`,
    categoryId: head.category.id,
    new: { version },
    why: comment || null,
  });
}

async function tell(
  tx: Tx,
  actor: Actor,
  head: PlannedHead,
  kind: string,
  recipients: readonly (number | null)[],
  details: Record<string, unknown>,
): Promise<void> {
  const recipientIds = [...new Set(recipients)].filter((id) => id !== null && id !== actor.id);
  await insertMails(tx, {
    kind,
    recipientIds: recipientIds as number[],
    payload: {
      ...details,
      lineId: head.line.id,
      line: head.line.name,
      category: head.category.name,
      actor: actor.name,
      link: `/plan/${head.line.id}`,
    },
  });
}

/** Gives the category's round another due date or other weeks, for the category lead. */
export function changeRound(
  database: Database,
  actor: Actor,
  categoryId: number,
  change: { due: string; firstWeek: string; lastWeek: string },
): Promise<Round> {
  demandRight(actor, 'lock-line', categoryId);
  return inTransaction(database, async (tx) => {
    await repository.lockLinesOfCategory(tx, categoryId);
    const round = await repository.findNewestRound(tx, categoryId);
    if (!round) throw new ProblemError('no-forecast', 'The category has no round yet. A forecast opens one.');
    const changed = await repository.insertRound(tx, {
      categoryId,
      opens: round.opens,
      ...alignRound(round, change),
      actorId: actor.id,
    });
    await writeAudit(tx, {
      actor,
      action: 'change-round',
      subject: `category:${categoryId}`,
      categoryId,
      old: round,
      new: changed,
    });
    return changed;
  });
}

function alignRound(
  round: Round,
  { due, firstWeek, lastWeek }: { due: string; firstWeek: string; lastWeek: string },
): { due: string; firstWeek: string; lastWeek: string } {
  const errors = [
    ...(
      [
        ['firstWeek', firstWeek],
        ['lastWeek', lastWeek],
      ] as const
    ).flatMap(([name, week]) =>
      (toDayNumber(week) - toDayNumber(round.firstWeek)) % 7 === 0
        ? []
        : [{ pointer: `/${name}`, detail: 'must be the first day of a trading week' }],
    ),
    ...(lastWeek < firstWeek ? [{ pointer: '/lastWeek', detail: 'must not lie before firstWeek' }] : []),
  ];
  if (errors.length > 0) throw new ProblemError('invalid-request', 'Correct the weeks and send again.', { errors });
  return { due, firstWeek, lastWeek };
}

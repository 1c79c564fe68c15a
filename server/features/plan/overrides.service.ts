import type { NewOverride, SavedOverrides, SaveOverrides } from '../../../shared/contracts/plan.ts';
import type { ProblemDetail } from '../../../shared/contracts/problem.ts';
import { scopeKey, type Scope } from '../../../shared/domain/override-arithmetic.ts';
import { addWeeks, listWeeks, toDayNumber, weekLabel, weeksBetween } from '../../../shared/domain/weeks.ts';
import { writeAudit } from '../../lib/audit.ts';
import type { Actor } from '../../lib/authorise.ts';
import { inTransaction, type Database, type Tx } from '../../lib/database.ts';
import { ProblemError } from '../../lib/problem.ts';
import { loadSettings } from '../settings/settings.service.ts';
import { deriveLineState, lockedPlanWeeks } from './line-state.ts';
import { demandLockedLine, demandOverride, demandPlanned, type PlannedHead } from './plan-access.ts';
import {
  comparePlans,
  createScopeSums,
  describeClashes,
  describeOverrides,
  findClashes,
  indexByScope,
  replayState,
  shareWeek,
  whyUnmet,
} from './plan-state.ts';
import { insertVersion, snapshotEvery, type NewStoredOverride } from './plan-writing.repository.ts';
import * as repository from './plan.repository.ts';
import type { StoredOverride, StoredSeries } from './plan.repository.ts';
import { rebuildVersion } from './versions.service.ts';

const mostConflictsTold = 1_000;
/** Far above any week of any item, and small enough that sums of a plan stay exact. */
const mostUnits = 1e9;
const largestFactor = 1_000;

/**
 * Saves changes as one new version on top of the newest. Refused as a whole: `plan-locked` where a week is locked, `stale-cells` where somebody else
 * changed a cell, something under it or a total over it after the base version, `cannot-spread` where a change can't be met.
 */
export function saveOverrides(
  database: Database,
  actor: Actor,
  lineId: number,
  save: SaveOverrides,
): Promise<SavedOverrides> {
  return inTransaction(database, async (tx) => {
    const head = demandPlanned(await demandLockedLine(tx, actor, lineId, 'see-category'));
    demandOverride(actor, head);
    const { run } = head;
    const window = { firstWeek: run.firstWeek, weeks: run.weeks };
    const lockedWeeks = lockedPlanWeeks(head);
    const reasons = await repository.listReasons(tx);
    const series = await repository.listPlanSeries(tx, [lineId]);
    demandUsable(save, head, series, new Set(reasons.filter(({ isActive }) => isActive).map(({ id }) => id)));
    demandUnlocked(save.overrides, lockedWeeks);

    const settings = await loadSettings(tx);
    const stored = await repository.listOverrides(tx, [lineId], run.firstWeek);
    const lastSequence = await repository.findLastSequence(tx, lineId);
    const reasonNames = new Map(reasons.map(({ id, name }) => [id, name]));
    const at = new Date().toISOString();
    // Ids of what isn't stored yet; they only have to differ from each other and from stored ones.
    const edits = save.overrides.map((override, index): StoredOverride => ({
      ...override,
      id: -1 - index,
      lineId,
      sequence: lastSequence + 1 + index,
      version: head.version.number + 1,
      authorId: actor.id,
      author: actor.name,
      at,
      reason: override.reasonId === null ? null : (reasonNames.get(override.reasonId) ?? null),
      note: override.note === '' ? null : override.note,
      baseModel: [],
    }));
    if (save.baseVersion < head.version.number)
      await demandFresh(tx, head, save.baseVersion, actor, { edits, stored, series });

    const before = series.map(({ plan }) => plan);
    const overrides = [...stored, ...edits];
    const { plan, unmet } = replayState({ window, series, overrides, lockedWeeks, lockedPlan: before });
    demandMet(unmet);
    demandSensible(plan);
    demandNotes(save.overrides, settings.noteThreshold, { window, series, before, after: plan });

    const modelOf = createScopeSums(
      series,
      series.map(({ model }) => model),
      window.weeks,
    );
    for (const edit of edits) {
      edit.baseModel = modelOf(edit.scope).slice(
        weeksBetween(window.firstWeek, edit.firstWeek),
        weeksBetween(window.firstWeek, edit.lastWeek) + 1,
      );
    }
    const { changedCells, changedUnits, changedSeries } = comparePlans(before, plan);
    const number = head.version.number + 1;
    const rowAt = (index: number) => {
      const { itemId, locationId } = series[index]!;
      return { itemId, locationId, plan: plan[index]! };
    };
    const reason = joinDistinct(edits.map((edit) => edit.reason));
    const note = onlyOne(edits.map((edit) => edit.note));
    const kind = deriveLineState(head) === 'submitted' ? 'adjustment' : 'overrides';
    const heldByScope = indexByScope(stored);
    const written = await insertVersion(
      tx,
      {
        lineId,
        number,
        parent: head.version.number,
        runId: run.id,
        kind,
        authorId: actor.id,
        reason,
        note,
        heldWeeks: lockedWeeks,
        changedCells,
        changedUnits,
      },
      {
        firstWeek: run.firstWeek,
        overrides: edits.map((edit): NewStoredOverride => toWritten(edit, heldByScope)),
        changed: changedSeries.map(rowAt),
        snapshot: number % snapshotEvery === 0 ? series.map((_, index) => rowAt(index)) : null,
      },
    );
    await writeAudit(tx, {
      actor,
      action: 'save-overrides',
      subject: `line:${lineId}`,
      categoryId: head.category.id,
      new: { version: number, overrides: edits.length, changedCells, changedUnits },
      why: [reason, note].filter((part) => part !== null).join(': ') || null,
    });

    const ids = new Map(written.overrideIds.map(({ id, sequence }) => [sequence, id]));
    const byEdit = new Map(edits.map((edit) => [edit.id, ids.get(edit.sequence) ?? edit.id]));
    for (const edit of edits) {
      edit.id = byEdit.get(edit.id) ?? edit.id;
      edit.at = written.at;
    }
    const isMerged = save.baseVersion < head.version.number;
    return {
      version: {
        number,
        parent: head.version.number,
        kind,
        author: actor.name,
        at: written.at,
        reason,
        note,
        runId: run.id,
        changedCells,
        changedUnits,
        isLockedVersion: false,
      },
      changed: (isMerged ? series.map((_, index) => index) : changedSeries).map(rowAt),
      overrides: describeOverrides({
        window,
        series,
        overrides,
        lockedWeeks,
        unmet: unmet.map((one) => ({ ...one, id: byEdit.get(one.id) ?? one.id })),
        lookThreshold: settings.lookThreshold,
      }),
    };
  });
}

function toWritten(edit: StoredOverride, heldByScope: (scope: Scope) => readonly StoredOverride[]): NewStoredOverride {
  const { sequence, scope, firstWeek, lastWeek, operation, value, reasonId, note, baseModel } = edit;
  const clears =
    operation === 'clear'
      ? heldByScope(scope)
          .filter((other) => other.operation !== 'clear' && shareWeek(edit, other))
          .map(({ id }) => id)
      : null;
  return { sequence, scope, firstWeek, lastWeek, operation, value, clears, reasonId, note, baseModel };
}

function joinDistinct(texts: readonly (string | null)[]): string | null {
  return [...new Set(texts.filter((text) => text !== null))].join(', ') || null;
}

function onlyOne(texts: readonly (string | null)[]): string | null {
  const distinct = new Set(texts.filter((text) => text !== null));
  return distinct.size === 1 ? ([...distinct][0] ?? null) : null;
}

/** Weeks, scopes, values and reasons of a save; throws `invalid-request` with a pointer for each that can't be used. */
function demandUsable(
  save: SaveOverrides,
  head: PlannedHead,
  series: readonly StoredSeries[],
  activeReasons: ReadonlySet<number>,
): void {
  const { run, version } = head;
  const lastWeek = addWeeks(run.firstWeek, run.weeks - 1);
  const known = new Set(
    series.flatMap(({ itemId, locationId }) => [`${itemId}/*`, `*/${locationId}`, `${itemId}/${locationId}`]),
  );
  known.add('*/*');
  const errors: ProblemDetail[] = [];
  const refuse = (pointer: string, detail: string): void => void errors.push({ pointer, detail });
  if (save.baseVersion > version.number) refuse('/baseVersion', `the newest version is ${version.number}`);
  save.overrides.forEach(({ scope, firstWeek, lastWeek: last, operation, value, reasonId }, index) => {
    const at = `/overrides/${index}`;
    for (const [name, week] of [
      ['firstWeek', firstWeek],
      ['lastWeek', last],
    ] as const) {
      if ((toDayNumber(week) - toDayNumber(run.firstWeek)) % 7 !== 0) {
        refuse(`${at}/${name}`, 'must be the first day of a trading week');
      } else if (week < run.firstWeek || week > lastWeek) {
        refuse(
          `${at}/${name}`,
          `is not planned; the plan runs from ${weekLabel(run.firstWeek)} to ${weekLabel(lastWeek)}`,
        );
      }
    }
    if (last < firstWeek) refuse(`${at}/lastWeek`, 'must not lie before firstWeek');
    if (!known.has(scopeKey(scope))) refuse(`${at}/scope`, 'is not planned in this line');
    if (operation === 'clear') {
      if (value !== null) refuse(`${at}/value`, 'must be null for clear');
    } else if (value === null) refuse(`${at}/value`, 'must be a number');
    else if (value < 0 && operation !== 'add') refuse(`${at}/value`, 'must not be negative');
    else if (Math.abs(value) > (operation === 'scale by' ? largestFactor : mostUnits)) {
      refuse(`${at}/value`, 'is too large');
    }
    if (reasonId !== null ? !activeReasons.has(reasonId) : operation !== 'clear') {
      refuse(`${at}/reasonId`, 'must be one of the reasons');
    }
  });
  if (errors.length > 0) {
    throw new ProblemError('invalid-request', 'Correct what is named below and save again.', { errors });
  }
}

function demandUnlocked(overrides: readonly NewOverride[], lockedWeeks: readonly string[]): void {
  const met = new Set<string>();
  const errors: ProblemDetail[] = [];
  overrides.forEach(({ firstWeek, lastWeek }, index) => {
    const locked = lockedWeeks.filter((week) => week >= firstWeek && week <= lastWeek);
    if (locked.length === 0) return;
    for (const week of locked) met.add(week);
    errors.push({ pointer: `/overrides/${index}`, detail: `${locked.map(weekLabel).join(', ')} locked` });
  });
  if (errors.length === 0) return;
  throw new ProblemError(
    'plan-locked',
    `Nothing was saved: ${[...met].sort().map(weekLabel).join(', ')} ${met.size === 1 ? 'is' : 'are'} locked. Leave these weeks out, or ask the category lead to unlock them.`,
    { errors },
  );
}

/** Refuses what somebody else changed after the base version, with all three values of each cell; everything else merges. */
async function demandFresh(
  tx: Tx,
  head: PlannedHead,
  baseVersion: number,
  actor: Actor,
  {
    edits,
    stored,
    series,
  }: { edits: readonly StoredOverride[]; stored: readonly StoredOverride[]; series: readonly StoredSeries[] },
): Promise<void> {
  const clashes = findClashes(edits, stored, { baseVersion, authorId: actor.id });
  if (clashes.length === 0) return;
  const { run } = head;
  const window = { firstWeek: run.firstWeek, weeks: run.weeks };
  const newest = createScopeSums(
    series,
    series.map(({ plan }) => plan),
    window.weeks,
  );
  const base = baseVersion > 0 ? await rebuildVersion(tx, head.line.id, baseVersion) : null;
  const baseOf = base
    ? createScopeSums(
        base.series,
        base.series.map(({ plan }) => plan),
        base.window.weeks,
      )
    : null;
  const lockedWeeks = lockedPlanWeeks(head);
  const own = replayState({
    window,
    series,
    overrides: [...stored.filter(({ version, authorId }) => version <= baseVersion || authorId === actor.id), ...edits],
    lockedWeeks,
    lockedPlan: series.map(({ plan }) => plan),
  });
  const yours = createScopeSums(series, own.plan, window.weeks);
  const at = (sums: number[], firstWeek: string, week: string): number => sums[weeksBetween(firstWeek, week)] ?? 0;
  const conflicts = describeClashes(clashes.slice(0, mostConflictsTold), {
    before: (scope, week) => (base && baseOf ? at(baseOf(scope), base.window.firstWeek, week) : 0),
    theirs: (scope, week) => at(newest(scope), window.firstWeek, week),
    yours: (scope, week) => at(yours(scope), window.firstWeek, week),
  });
  const authors = [...new Set(conflicts.map(({ theirAuthor }) => theirAuthor))];
  throw new ProblemError(
    'stale-cells',
    `Nothing was saved: ${authors.join(', ')} changed ${clashes.length === 1 ? 'this cell' : `${clashes.length} of these cells`} since version ${baseVersion}. Choose which value holds, then save again.`,
    { conflicts },
  );
}

function demandMet(unmet: readonly { id: number; weekStart: string; reason: keyof typeof whyUnmet }[]): void {
  // Stored overrides have positive ids; one of them that can't be met any more waits for a decision instead.
  const ofSave = unmet.filter(({ id }) => id < 0);
  const [first] = ofSave;
  if (!first) return;
  const others = ofSave.length - 1;
  throw new ProblemError(
    'cannot-spread',
    `Nothing was saved: ${weekLabel(first.weekStart)} can’t be met, since ${whyUnmet[first.reason]}${others > 0 ? ` (and ${others} more)` : ''}.`,
    {
      errors: ofSave.map(({ id, weekStart, reason }) => ({
        pointer: `/overrides/${-1 - id}`,
        detail: `${weekLabel(weekStart)}: ${whyUnmet[reason]}`,
      })),
    },
  );
}

/** Factors on factors can grow past what a plan can hold. */
function demandSensible(plan: readonly (readonly number[])[]): void {
  if (plan.every((row) => row.every((units) => units <= mostUnits))) return;
  throw new ProblemError(
    'cannot-spread',
    `Nothing was saved: a number would be above ${mostUnits.toLocaleString('en')}.`,
  );
}

/** A change of a scope's number by more than the threshold, as a share of what was there, needs a note; from nothing to something always does. */
function demandNotes(
  overrides: readonly NewOverride[],
  noteThreshold: number,
  plans: {
    window: { firstWeek: string; weeks: number };
    series: readonly StoredSeries[];
    before: readonly (readonly number[])[];
    after: readonly (readonly number[])[];
  },
): void {
  const { window, series } = plans;
  const before = createScopeSums(series, plans.before, window.weeks);
  const after = createScopeSums(series, plans.after, window.weeks);
  const isFarOff = (scope: Scope, weekStart: string): boolean => {
    const week = weeksBetween(window.firstWeek, weekStart);
    const was = before(scope)[week] ?? 0;
    const now = after(scope)[week] ?? 0;
    if (was === now) return false;
    return was === 0 || Math.abs(now - was) / Math.abs(was) > noteThreshold + 1e-9;
  };
  const errors = overrides.flatMap(({ scope, firstWeek, lastWeek, operation, note }, index) =>
    operation !== 'clear' &&
    (note === null || note === '') &&
    listWeeks(firstWeek, weeksBetween(firstWeek, lastWeek) + 1).some((week) => isFarOff(scope, week))
      ? [{ pointer: `/overrides/${index}/note`, detail: 'say in a note why the number changes this much' }]
      : [],
  );
  if (errors.length > 0) {
    throw new ProblemError(
      'invalid-request',
      `A change of more than ${Math.round(noteThreshold * 100)} % needs a note. Add one and save again.`,
      { errors },
    );
  }
}

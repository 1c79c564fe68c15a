import type { HandOver, LineState, LockRange, Round, VersionSummary } from '../../../shared/contracts/plan.ts';
import type { Named } from '../../../shared/contracts/primitives.ts';
import { addWeeks, listWeeks } from '../../../shared/domain/weeks.ts';

export interface LockedWeek {
  weekStart: string;
  version: number;
  actor: string;
  at: string;
}

export interface RunHead {
  id: number;
  at: string;
  salesTo: string;
  salesRevision: number | null;
  calendarRevision: number | null;
  /** First planned week and the number of planned weeks. */
  firstWeek: string;
  weeks: number;
}

/** What a line's state and the checks of every change are derived from. */
export interface LineHead {
  line: Named;
  category: Named;
  /** The newest version and its run; null before the first forecast. */
  version: VersionSummary | null;
  versionAuthorId: number | null;
  run: RunHead | null;
  /** Ascending; every locked week, also those before the plan's first. */
  locked: LockedWeek[];
  /** The newest hand-over, as it was written. */
  handOver: (HandOver & { actorId: number }) | null;
  /** A forecast was saved, or a lock was opened, after the newest hand-over. */
  isHandOverSpent: boolean;
  round: Round | null;
}

export function plannedWeeks({ run }: Pick<LineHead, 'run'>): string[] {
  return run ? listWeeks(run.firstWeek, run.weeks) : [];
}

/** Locked weeks inside the plan. */
export function lockedPlanWeeks(head: Pick<LineHead, 'run' | 'locked'>): string[] {
  const { run, locked } = head;
  if (!run) return [];
  const end = addWeeks(run.firstWeek, run.weeks);
  return locked.map(({ weekStart }) => weekStart).filter((week) => week >= run.firstWeek && week < end);
}

/**
 * Locked once every planned week of the round is; else submitted from the hand-over until it is returned, lapses with a new forecast, or a
 * lock is opened; else draft.
 */
export function deriveLineState(
  head: Pick<LineHead, 'run' | 'locked' | 'handOver' | 'isHandOverSpent' | 'round'>,
): LineState {
  const { round } = head;
  const locked = new Set(lockedPlanWeeks(head));
  const ofRound = plannedWeeks(head).filter((week) => !round || (week >= round.firstWeek && week <= round.lastWeek));
  if (ofRound.length > 0 && ofRound.every((week) => locked.has(week))) return 'locked';
  return head.handOver?.state === 'submitted' && !head.isHandOverSpent ? 'submitted' : 'draft';
}

/** Locked weeks joined into runs of following weeks locked by the same event. */
export function joinLockedWeeks(locked: readonly LockedWeek[]): LockRange[] {
  const ranges: LockRange[] = [];
  for (const { weekStart, version, actor, at } of locked) {
    const open = ranges.at(-1);
    if (open && open.version === version && open.at === at && addWeeks(open.lastWeek, 1) === weekStart) {
      open.lastWeek = weekStart;
    } else ranges.push({ firstWeek: weekStart, lastWeek: weekStart, version, actor, at });
  }
  return ranges;
}

/** Runs of following weeks, ascending. */
export function joinWeeks(weeks: readonly string[]): { firstWeek: string; lastWeek: string }[] {
  const ranges: { firstWeek: string; lastWeek: string }[] = [];
  for (const week of [...weeks].sort()) {
    const open = ranges.at(-1);
    if (open && addWeeks(open.lastWeek, 1) === week) open.lastWeek = week;
    else ranges.push({ firstWeek: week, lastWeek: week });
  }
  return ranges;
}

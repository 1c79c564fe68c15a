import type { LineState } from '../../../shared/contracts/plan.ts';
import type { Right } from '../../../shared/domain/roles.ts';
import { demandRight, hasRight, scopeOf, type Actor } from '../../lib/authorise.ts';
import type { Tx } from '../../lib/database.ts';
import { ProblemError } from '../../lib/problem.ts';
import { deriveLineState, lockedPlanWeeks, plannedWeeks, type LineHead } from './line-state.ts';
import * as repository from './plan.repository.ts';

function noSuchLine(): ProblemError {
  return new ProblemError('not-found', 'There is no such line, or you have no access to its category.');
}

/** Head of a line that the person may see; `not-found` otherwise. */
export async function demandLine(tx: Tx, actor: Actor, lineId: number): Promise<LineHead> {
  const [head] = await repository.listLineHeads(tx, {
    lineIds: [lineId],
    categories: scopeOf(actor, 'see-category'),
  });
  if (!head) throw noSuchLine();
  return head;
}

/** The same for a change: takes the line's row first, so that what is read holds until the transaction ends. */
export async function demandLockedLine(tx: Tx, actor: Actor, lineId: number, right: Right): Promise<LineHead> {
  if (!(await repository.lockLine(tx, lineId, scopeOf(actor, 'see-category')))) throw noSuchLine();
  const head = await demandLine(tx, actor, lineId);
  demandRight(actor, right, head.category.id);
  return head;
}

export type PlannedHead = LineHead & {
  version: NonNullable<LineHead['version']>;
  run: NonNullable<LineHead['run']>;
};

/** Demands that the line has been forecast. */
export function demandPlanned(head: LineHead): PlannedHead {
  const { version, run } = head;
  if (!version || !run) {
    throw new ProblemError(
      'no-forecast',
      `${head.line.name} has no forecast yet. Generate one for ${head.category.name} first.`,
    );
  }
  return { ...head, version, run };
}

/** Refuses a hand-over or lock that names another version than the newest. */
export function demandNewestVersion(head: PlannedHead, version: number): void {
  if (head.version.number === version) return;
  throw new ProblemError(
    'wrong-state',
    `${head.version.author} has saved version ${head.version.number} since you looked at version ${version}. Look at it, then try again.`,
  );
}

export function rightToOverride(state: LineState): Right {
  return state === 'submitted' ? 'adjust-submitted' : 'override-draft';
}

/** Demands the right to override in the line's state: of a draft, or of what was submitted. */
export function demandOverride(actor: Actor, head: LineHead): void {
  const state = deriveLineState(head);
  const { id } = head.category;
  if (state === 'submitted' && !hasRight(actor, 'adjust-submitted', id) && hasRight(actor, 'override-draft', id)) {
    throw new ProblemError(
      'plan-submitted',
      `${head.line.name} is with the category lead. Ask for its return, or let the lead adjust it.`,
    );
  }
  demandRight(actor, rightToOverride(state), id);
}

/** What the person may do with the line now. */
export function listMay(actor: Actor, head: LineHead) {
  const { id } = head.category;
  const state = deriveLineState(head);
  const hasOpenWeeks = plannedWeeks(head).length > lockedPlanWeeks(head).length;
  return {
    override: hasOpenWeeks && hasRight(actor, rightToOverride(state), id),
    submit: hasOpenWeeks && state === 'draft' && hasRight(actor, 'submit-line', id),
    returnLine: state === 'submitted' && hasRight(actor, 'return-line', id),
    lock: state === 'submitted' && hasRight(actor, 'lock-line', id),
    unlock: lockedPlanWeeks(head).length > 0 && hasRight(actor, 'unlock-line', id),
    forecast: hasRight(actor, 'generate-forecast', id),
  };
}

import { mayDo, reachOf, type Assignment, type Right } from '../../shared/domain/roles.ts';
import { ProblemError } from './problem.ts';

/** The person a request or job acts for, as read at its start. */
export interface Actor {
  id: number;
  name: string;
  email: string;
  assignments: readonly Assignment[];
  isDataSteward: boolean;
}

/**
 * Demands a right in a category (or anywhere, if null). A category one can't see is `not-found`, one that is seen but not to be changed `not-allowed`.
 */
export function demandRight(actor: Actor, right: Right, categoryId: number | null): void {
  if (mayDo(actor.assignments, right, categoryId)) return;
  if (categoryId !== null && !mayDo(actor.assignments, 'see-category', categoryId)) {
    throw new ProblemError('not-found', 'There is no such thing, or you have no access to its category.');
  }
  throw new ProblemError('not-allowed', `Your role doesn’t allow this. ${whoMay[right]}`);
}

export function hasRight(actor: Actor, right: Right, categoryId: number | null): boolean {
  return mayDo(actor.assignments, right, categoryId);
}

/**
 * Category ids that a query is scoped to, to be bound as `$categories` in
 * `($categories::int[] is null or x.category_id = any($categories::int[]))`; null = all categories.
 */
export function scopeOf(actor: Actor, right: Right): number[] | null {
  const reach = reachOf(actor.assignments, right);
  return reach === 'all' ? null : reach;
}

const whoMay: Readonly<Record<Right, string>> = {
  'see-category': 'Ask your administrator for access to the category.',
  'import-sales': 'A planner or category lead of the category can import.',
  'edit-calendar': 'A planner or category lead of the category can change the calendar.',
  'edit-targets': 'Finance, a planner or a category lead can change targets.',
  'generate-forecast': 'A planner or category lead of the category can generate a forecast.',
  'override-draft': 'A planner or category lead of the category can override.',
  'submit-line': 'A planner or category lead of the category can submit.',
  'adjust-submitted': 'The category lead can adjust submitted numbers, or return the line to the planner.',
  'return-line': 'The category lead can return a line.',
  'lock-line': 'The category lead can lock.',
  'unlock-line': 'The category lead can unlock.',
  'build-pack': 'Finance or the category lead can build packs.',
  'download-pack': 'Ask your administrator for access to the category.',
  'create-range': 'A planner or category lead of the category, or an administrator, can create this.',
  administer: 'An administrator can do this.',
  'read-audit-own': 'Ask your administrator.',
  'read-audit-category': 'Ask your administrator.',
  'read-audit-all': 'Finance and administrators can read all of the log.',
};

import type { LinePlan } from '../../../shared/contracts/plan.ts';
import { scopeHolds } from '../../../shared/domain/override-arithmetic.ts';
import { weeksBetween } from '../../../shared/domain/weeks.ts';
import type { PendingEdit } from './pending-edits.ts';

/** Cells (scope × week) that the edits change. */
export function countCells(edits: readonly PendingEdit[]): number {
  return edits.reduce((cells, { firstWeek, lastWeek }) => cells + weeksBetween(firstWeek, lastWeek) + 1, 0);
}

/** The largest change of an edited cell as a share of the saved plan; Infinity where something is planned from nothing, 0 where nothing changes. */
export function measureLargestChange(
  plan: LinePlan,
  edited: readonly (readonly number[])[],
  edits: readonly PendingEdit[],
): number {
  const { planFirstWeek } = plan;
  if (planFirstWeek === null) return 0;
  const membersOf = new Map<string, number[]>();
  let largest = 0;
  for (const { scope, firstWeek, lastWeek } of edits) {
    const key = `${scope.itemId}/${scope.locationId}`;
    let members = membersOf.get(key);
    if (!members) {
      members = plan.series.flatMap((series, index) => (scopeHolds(scope, series) ? [index] : []));
      membersOf.set(key, members);
    }
    const last = Math.min(plan.planWeeks - 1, weeksBetween(planFirstWeek, lastWeek));
    for (let week = Math.max(0, weeksBetween(planFirstWeek, firstWeek)); week <= last; week += 1) {
      let before = 0;
      let after = 0;
      for (const index of members) {
        before += plan.series[index]?.plan[week] ?? 0;
        after += edited[index]?.[week] ?? 0;
      }
      if (Math.abs(after - before) < 1e-9) continue;
      largest = Math.max(largest, before === 0 ? Infinity : Math.abs(after - before) / Math.abs(before));
    }
  }
  return largest;
}

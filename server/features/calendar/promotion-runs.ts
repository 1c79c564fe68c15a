import type { CalendarPromotion } from '../../../shared/contracts/calendar.ts';
import { addWeeks } from '../../../shared/domain/weeks.ts';

/** The terms of a promotion, of one item at one location in one week. */
export interface PromotionWeek {
  itemId: number;
  locationId: number;
  weekStart: string;
  name: string;
  depth: number | null;
  price: number | null;
  feature: number;
  display: number;
  mechanics: Readonly<Record<string, number>>;
}

/** The same terms over a run of weeks without a hole, at one set of locations, for one set of items. */
export interface PromotionRun extends CalendarPromotion {
  price: number | null;
}

/**
 * Joins weeks of equal terms: first runs of weeks per item and location, then the locations of an item with equal runs, then items with equal
 * locations and runs. Weeks come in any order; every week lies in exactly one run. Runs come by first week, then name.
 */
export function groupPromotionWeeks(weeks: readonly PromotionWeek[]): PromotionRun[] {
  const sorted = [...weeks].sort(
    (a, b) => a.itemId - b.itemId || a.locationId - b.locationId || (a.weekStart < b.weekStart ? -1 : 1),
  );
  const runs: { week: PromotionWeek; terms: string; lastWeek: string }[] = [];
  for (const week of sorted) {
    const terms = describeTerms(week);
    const open = runs.at(-1);
    if (
      open &&
      open.week.itemId === week.itemId &&
      open.week.locationId === week.locationId &&
      open.terms === terms &&
      addWeeks(open.lastWeek, 1) === week.weekStart
    ) {
      open.lastWeek = week.weekStart;
    } else {
      runs.push({ week, terms, lastWeek: week.weekStart });
    }
  }

  const byItem = new Map<string, { first: (typeof runs)[number]; locationIds: number[] }>();
  for (const run of runs) {
    const key = `${run.week.itemId}|${run.week.weekStart}|${run.lastWeek}|${run.terms}`;
    const found = byItem.get(key);
    if (found) found.locationIds.push(run.week.locationId);
    else byItem.set(key, { first: run, locationIds: [run.week.locationId] });
  }

  const joined = new Map<string, PromotionRun>();
  for (const { first, locationIds } of byItem.values()) {
    const { week, terms, lastWeek } = first;
    const key = `${locationIds.join(',')}|${week.weekStart}|${lastWeek}|${terms}`;
    const found = joined.get(key);
    if (found) {
      found.itemIds.push(week.itemId);
      continue;
    }
    joined.set(key, {
      name: week.name,
      firstWeek: week.weekStart,
      lastWeek,
      itemIds: [week.itemId],
      locationIds,
      depth: week.depth,
      price: week.price,
      feature: week.feature,
      display: week.display,
      mechanics: { ...week.mechanics },
    });
  }
  return [...joined.values()].sort(
    (a, b) =>
      a.firstWeek.localeCompare(b.firstWeek) || a.name.localeCompare(b.name) || a.lastWeek.localeCompare(b.lastWeek),
  );
}

function describeTerms({ name, depth, price, feature, display, mechanics }: PromotionWeek): string {
  const named = Object.entries(mechanics)
    .filter(([, share]) => share !== 0)
    .sort(([a], [b]) => (a < b ? -1 : 1));
  return JSON.stringify([name, depth, price, feature, display, named]);
}

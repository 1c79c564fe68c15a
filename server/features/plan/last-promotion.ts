import type { LastPromotion } from '../../../shared/contracts/plan.ts';
import { addWeeks } from '../../../shared/domain/weeks.ts';

/** One week of an item as sold, over the locations asked for. Shares 0…1; null = unknown. */
export interface ItemWeek {
  weekStart: string;
  units: number;
  isPromoted: boolean;
  /** Price cut as a share of the regular price. */
  depth: number | null;
  feature: number;
  display: number;
}

/** Terms of a planned promotion that an earlier one must share to be called similar. */
export interface PlannedTerms {
  depth: number | null;
  feature: number;
  display: number;
}

const depthTolerance = 0.1;
const ordinaryWeeks = 8;
const fewestOrdinaryWeeks = 3;

/**
 * The newest run of promoted weeks that was advertised and placed like the planned promotion and whose price cut is within ten points of it (where both
 * are known), with its units a week beside the median of up to eight weeks without promotion before it. weeks: ascending. null if there is none.
 */
export function findLastSimilarPromotion(weeks: readonly ItemWeek[], terms: PlannedTerms): LastPromotion | null {
  for (const [first, end] of listRuns(weeks).reverse()) {
    const run = weeks.slice(first, end);
    const depth = averageDepth(run);
    const isFeatured = run.some(({ feature }) => feature > 0);
    const isDisplayed = run.some(({ display }) => display > 0);
    if (isFeatured !== terms.feature > 0 || isDisplayed !== terms.display > 0) continue;
    if (depth !== null && terms.depth !== null && Math.abs(depth - terms.depth) > depthTolerance + 1e-9) continue;
    const before = weeks
      .slice(0, first)
      .filter(({ isPromoted }) => !isPromoted)
      .slice(-ordinaryWeeks)
      .map(({ units }) => units);
    return {
      firstWeek: run[0]!.weekStart,
      lastWeek: run.at(-1).weekStart,
      weeks: run.length,
      depth,
      isFeatured,
      isDisplayed,
      unitsAWeek: run.reduce((total, { units }) => total + units, 0) / run.length,
      ordinaryUnitsAWeek: before.length < fewestOrdinaryWeeks ? null : findMedian(before),
    };
  }
  return null;
}

/** Positions [first, end) of promoted weeks that follow each other without a hole. */
function listRuns(weeks: readonly ItemWeek[]): [number, number][] {
  const runs: [number, number][] = [];
  weeks.forEach(({ weekStart, isPromoted }, index) => {
    if (!isPromoted) return;
    const open = runs.at(-1);
    if (open?.[1] === index && addWeeks(weeks[index - 1]!.weekStart, 1) === weekStart) open[1] = index + 1;
    else runs.push([index, index + 1]);
  });
  return runs;
}

function averageDepth(run: readonly ItemWeek[]): number | null {
  const known = run.flatMap(({ depth }) => (depth === null ? [] : [depth]));
  return known.length === 0 ? null : known.reduce((total, depth) => total + depth, 0) / known.length;
}

function findMedian(values: readonly number[]): number {
  const sorted = [...values].sort((a, b) => a - b);
  const middle = Math.floor(sorted.length / 2);
  return sorted.length % 2 === 1 ? sorted[middle]! : (sorted[middle - 1]! + sorted[middle]!) / 2;
}

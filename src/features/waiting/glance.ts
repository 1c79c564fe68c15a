import type { CategoryPlan } from '../../../shared/contracts/plan.ts';

export interface GlanceWeek {
  /** Position counted from the first sold week shown. */
  units: number | null;
  isPlanned: boolean;
  lastYear: number | null;
}

/** The last sold weeks and the first planned ones, each with its week of a year before. */
export function listGlanceWeeks(weekline: NonNullable<CategoryPlan['weekline']>, most = 13): GlanceWeek[] {
  const { sold, planned } = weekline;
  const from = Math.max(0, sold.length - most);
  const weeks: GlanceWeek[] = [];
  for (let position = from; position < sold.length; position += 1) {
    weeks.push({ units: sold[position] ?? null, isPlanned: false, lastYear: sold[position - 52] ?? null });
  }
  for (let ahead = 0; ahead < Math.min(most, planned.length); ahead += 1) {
    weeks.push({
      units: planned[ahead] ?? null,
      isPlanned: true,
      lastYear: sold[sold.length + ahead - 52] ?? null,
    });
  }
  return weeks;
}

export interface LineGlance {
  planned: number;
  /** Against the same weeks a year before; null unless every one of them is known. */
  againstLastYear: number | null;
}

export function sumLine(plan: readonly number[], lastYear: readonly (number | null)[], most = 13): LineGlance {
  const planned = plan.slice(0, most);
  const before = lastYear.slice(0, planned.length);
  const total = planned.reduce((sum, units) => sum + units, 0);
  const isKnown = before.length === planned.length && before.length > 0 && before.every((units) => units !== null);
  const beforeTotal = before.reduce<number>((sum, units) => sum + (units ?? 0), 0);
  return { planned: total, againstLastYear: isKnown && beforeTotal > 0 ? total / beforeTotal - 1 : null };
}

import type { Column, ColumnGroup } from '../features/column.ts';
import { PRICE_PAID } from '../features/own-columns.ts';
import type { LinePanel } from '../features/line-panel.ts';
import type { SeriesMoments } from '../fit/series-moments.ts';

export type PartName = 'level' | ColumnGroup | 'recent level';

export const partNames: readonly PartName[] = [
  'level',
  'price',
  'promotion',
  'around',
  'neighbours',
  'season',
  'holiday',
  'trend',
  'recent level',
];

/** Groups whose part is told against the series' average week, so that the level is that of an ordinary week. */
const AGAINST_AVERAGE: readonly ColumnGroup[] = ['price', 'neighbours', 'trend'];

export interface PredictedSeries {
  /** ln of the forecast per week of the horizon: the sum of the parts. */
  linear: Float64Array;
  parts: Record<PartName, Float64Array>;
}

/**
 * ln forecast of one series over the horizon as a sum of named parts. Price and neighbours are told against the series' own average,
 * promotion against none; with one slope for the price paid, the cut's share of it belongs to promotion, and the average is that without cuts.
 */
export function predictSeries(
  panel: LinePanel,
  s: number,
  columns: readonly Column[],
  slopes: Float64Array,
  level: number,
  moments: SeriesMoments,
  recentLevel: (h: number) => number,
): PredictedSeries {
  const { horizon, pastWeeks } = panel;
  const parts = Object.fromEntries(partNames.map((name) => [name, new Float64Array(horizon)])) as Record<
    PartName,
    Float64Array
  >;
  let reference = level;
  columns.forEach((column, k) => {
    const slope = slopes[k]!;
    if (slope === 0) return;
    const values = column.values[s]!;
    const cut = column.name === PRICE_PAID ? panel.series[s]!.lnDepth : null;
    const average = cut
      ? averageWithoutCut(panel, s, values, cut)
      : AGAINST_AVERAGE.includes(column.group)
        ? moments.columnMeans[k]!
        : 0;
    reference += slope * average;
    const part = parts[column.group];
    for (let h = 0; h < horizon; h++) {
      const t = pastWeeks + h;
      const cutNow = cut ? Math.min(0, cut[t]!) : 0;
      part[h]! += slope * (values[t]! - average - cutNow);
      if (cutNow !== 0) parts.promotion[h]! += slope * cutNow;
    }
  });
  parts.level.fill(reference);
  for (let h = 0; h < horizon; h++) parts['recent level'][h] = recentLevel(h);
  const linear = new Float64Array(horizon);
  for (const name of partNames) for (let h = 0; h < horizon; h++) linear[h]! += parts[name][h]!;
  return { linear, parts };
}

/** Average over the used weeks of what ln price paid would have been without cuts. */
function averageWithoutCut(panel: LinePanel, s: number, values: Float64Array, cut: Float64Array): number {
  const { isUsed, usedWeeks } = panel.series[s]!;
  let total = 0;
  for (let t = 0; t < panel.pastWeeks; t++) if (isUsed[t]) total += values[t]! - Math.min(0, cut[t]!);
  return total / Math.max(1, usedWeeks);
}

/**
 * Parts of the plan told against those of the same weeks without promotions: level, price, season, holiday, trend and recent level are
 * those of the base, with neighbours at their shelf prices in the level and what the last sold promotions left behind in the recent level;
 * promotion, around and neighbours hold all that the plan has beyond it. The sum stays ln of the plan's forecast; that of the base's parts is ln of the base's.
 */
export function tellAgainstBase(plan: PredictedSeries, base: PredictedSeries): Record<PartName, Float64Array> {
  const horizon = plan.linear.length;
  const sum = (of: PredictedSeries['parts'], names: readonly PartName[]): Float64Array =>
    Float64Array.from({ length: horizon }, (_, h) => names.reduce((total, name) => total + of[name][h]!, 0));
  const beyond = (names: readonly PartName[]): Float64Array => {
    const without = sum(base.parts, names);
    return sum(plan.parts, names).map((value, h) => value - without[h]!);
  };
  return {
    level: sum(base.parts, ['level', 'neighbours']),
    price: sum(base.parts, ['price', 'promotion']),
    promotion: beyond(['level', 'price', 'promotion', 'season', 'holiday', 'trend', 'recent level']),
    around: beyond(['around']),
    neighbours: beyond(['neighbours']),
    season: base.parts.season,
    holiday: base.parts.holiday,
    trend: base.parts.trend,
    'recent level': sum(base.parts, ['recent level', 'around']),
  };
}

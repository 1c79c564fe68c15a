import type { Column } from './column.ts';
import type { LinePanel } from './line-panel.ts';

export const ATTRACTION = "neighbours' attraction";

/** Units sold per series up to the origin, per used week; the weights of the neighbours' price index. */
export function averageUnits(panel: LinePanel): Float64Array {
  return Float64Array.from(panel.series, (series) => {
    let sum = 0;
    for (let t = 0; t < panel.pastWeeks; t++) if (series.isUsed[t]) sum += series.units[t]!;
    return series.usedWeeks > 0 ? sum / series.usedWeeks : 0;
  });
}

/**
 * For each series the weighted mean, over the other series of its location, of `valuesOf`; weights = their average units.
 * A series without others of any weight gets zeros.
 */
function averageOverOthers(
  panel: LinePanel,
  weights: Float64Array,
  valuesOf: (series: LinePanel['series'][number], t: number) => number,
): Float64Array[] {
  const length = panel.weeks.length;
  const total = panel.locations.map(() => 0);
  const sums = panel.locations.map(() => new Float64Array(length));
  const own = panel.series.map((series, s) => {
    const values = new Float64Array(length);
    const sum = sums[series.location]!;
    total[series.location]! += weights[s]!;
    for (let t = 0; t < length; t++) {
      values[t] = weights[s]! * valuesOf(series, t);
      sum[t]! += values[t]!;
    }
    return values;
  });
  return panel.series.map((series, s) => {
    const rest = total[series.location]! - weights[s]!;
    if (!(rest > 1e-9 * total[series.location]!)) return new Float64Array(length);
    return own[s]!.map((value, t) => (sums[series.location]![t]! - value) / rest);
  });
}

/** ln of the share-weighted price index of the other items of the location; each price against its own mean up to the origin. */
export function buildNeighbourPrice(panel: LinePanel, weights: Float64Array): Column {
  const means = panel.series.map((series) => {
    let sum = 0;
    for (let t = 0; t < panel.pastWeeks; t++) sum += series.lnRegular[t]! + series.lnDepth[t]!;
    return sum / panel.pastWeeks;
  });
  const meanOf = new Map(panel.series.map((series, s) => [series, means[s]!]));
  return {
    name: "neighbours' price",
    group: 'neighbours',
    hasOwnSlopes: true,
    sign: 0,
    priorSpread: 2,
    values: averageOverOthers(
      panel,
      weights,
      (series, t) => series.lnRegular[t]! + series.lnDepth[t]! - meanOf.get(series)!,
    ),
  };
}

/** Share of the other items of the location (by average units) that are featured, displayed or under a mechanic. */
export function buildNeighbourPromotion(panel: LinePanel, weights: Float64Array): Column {
  return {
    name: "neighbours' promotion",
    group: 'neighbours',
    hasOwnSlopes: true,
    sign: 0,
    priorSpread: 1,
    values: averageOverOthers(panel, weights, (series, t) => Math.max(series.feature[t]!, series.display[t]!)),
  };
}

/**
 * Attraction of the other items of the location: ln Σ exp(own fitted part), where the own fitted part is a series' level, price and
 * promotion without neighbours. ownParts: per series, per week. A series alone in its location gets zeros.
 */
export function buildAttraction(panel: LinePanel, ownParts: readonly Float64Array[]): Column {
  const length = panel.weeks.length;
  const sums = panel.locations.map(() => new Float64Array(length));
  panel.series.forEach((series, s) => {
    const sum = sums[series.location]!;
    for (let t = 0; t < length; t++) sum[t]! += Math.exp(ownParts[s]![t]!);
  });
  const seriesAt = panel.locations.map(() => 0);
  for (const series of panel.series) seriesAt[series.location]!++;
  return {
    name: ATTRACTION,
    group: 'neighbours',
    hasOwnSlopes: true,
    sign: 0,
    priorSpread: 1,
    values: panel.series.map((series, s) => {
      if (seriesAt[series.location]! < 2) return new Float64Array(length);
      const sum = sums[series.location]!;
      return ownParts[s]!.map((part, t) => Math.log(Math.max(sum[t]! - Math.exp(part), 1e-3 * sum[t]!)));
    }),
  };
}

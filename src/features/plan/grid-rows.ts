import type { LinePlan, OverrideScope } from '../../../shared/contracts/plan.ts';

export const rowModes = ['items', 'locations', 'series'] as const;
export type RowMode = (typeof rowModes)[number];

export interface GridRow {
  /** Names the row in the URL: `i12`, `l3`, `i12l3`, `total`. */
  key: string;
  kind: 'item' | 'location' | 'series' | 'total';
  /** What an override typed into this row is stored for. */
  scope: OverrideScope;
  label: string;
  /** The location of a series row. */
  detail: string | null;
  /** Positions among the line's series. */
  seriesIndexes: number[];
}

type Range = Pick<LinePlan, 'items' | 'locations' | 'series'>;

/** Rows down the grid by mode, in the range's order, and the line total last. With a location in the filter only its series count. */
export function buildRows(plan: Range, mode: RowMode, locationId: number | null): GridRow[] {
  const kept = plan.series.flatMap((series, index) =>
    locationId === null || series.locationId === locationId ? [{ ...series, index }] : [],
  );
  const locationNames = new Map(plan.locations.map(({ id, name }) => [id, name]));
  const byItem = groupBy(kept, ({ itemId }) => itemId);
  const byLocation = groupBy(kept, (series) => series.locationId);
  const rows: GridRow[] = [];
  if (mode === 'items') {
    for (const item of plan.items) {
      const seriesIndexes = (byItem.get(item.id) ?? []).map(({ index }) => index);
      if (seriesIndexes.length === 0) continue;
      rows.push({
        key: `i${item.id}`,
        kind: 'item',
        scope: { itemId: item.id, locationId },
        label: item.name,
        detail: null,
        seriesIndexes,
      });
    }
  } else if (mode === 'locations') {
    for (const location of plan.locations) {
      const seriesIndexes = (byLocation.get(location.id) ?? []).map(({ index }) => index);
      if (seriesIndexes.length === 0) continue;
      rows.push({
        key: `l${location.id}`,
        kind: 'location',
        scope: { itemId: null, locationId: location.id },
        label: location.name,
        detail: null,
        seriesIndexes,
      });
    }
  } else {
    const order = new Map(plan.locations.map(({ id }, position) => [id, position]));
    for (const item of plan.items) {
      const ofItem = (byItem.get(item.id) ?? []).toSorted(
        (a, b) => (order.get(a.locationId) ?? 0) - (order.get(b.locationId) ?? 0),
      );
      for (const series of ofItem) {
        rows.push({
          key: `i${item.id}l${series.locationId}`,
          kind: 'series',
          scope: { itemId: item.id, locationId: series.locationId },
          label: item.name,
          detail: locationNames.get(series.locationId) ?? null,
          seriesIndexes: [series.index],
        });
      }
    }
  }
  rows.push({
    key: 'total',
    kind: 'total',
    scope: { itemId: null, locationId },
    label: '',
    detail: locationId === null ? null : (locationNames.get(locationId) ?? null),
    seriesIndexes: kept.map((series) => series.index),
  });
  return rows;
}

function groupBy<Value>(values: readonly Value[], keyOf: (value: Value) => number): Map<number, Value[]> {
  const groups = new Map<number, Value[]>();
  for (const value of values) {
    const group = groups.get(keyOf(value));
    if (group) group.push(value);
    else groups.set(keyOf(value), [value]);
  }
  return groups;
}

/**
 * A scope by the series that it holds: in a line of one location (or one item) the item and its only series are the same thing and get the same key.
 */
export function normalScopeKey(scope: OverrideScope, plan: Pick<LinePlan, 'items' | 'locations'>): string {
  const item = plan.items.length === 1 ? null : scope.itemId;
  const location = plan.locations.length === 1 ? null : scope.locationId;
  return `${item ?? '*'}:${location ?? '*'}`;
}

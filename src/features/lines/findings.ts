import type { Finding, LineFitView } from '../../../shared/contracts/lines.ts';

/** Findings that say the same of several places, said once. */
export interface FindingGroup {
  kind: string;
  /** Fills the sentence; values that differ between places are left out. */
  values: Record<string, string | number>;
  /** `item, location` of each, in the order they came. */
  places: string[];
}

const noNames: LineFitView['names'] = { items: {}, locations: {} };

/** Joins findings of one kind about one column; `names` by code of items and locations. */
export function groupFindings(findings: readonly Finding[], names = noNames): FindingGroup[] {
  const groups = new Map<string, FindingGroup>();
  for (const { kind, item, location, values = {} } of findings) {
    const key = `${kind}|${values.column ?? ''}`;
    const place = [item && (names.items[item] ?? item), location && (names.locations[location] ?? location)]
      .filter((part) => part !== undefined)
      .join(', ');
    const group = groups.get(key);
    if (!group) groups.set(key, { kind, values, places: place === '' ? [] : [place] });
    else if (place !== '' && !group.places.includes(place)) group.places.push(place);
  }
  return [...groups.values()];
}

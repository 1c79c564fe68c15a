import type { WhyNumber } from '../../../shared/contracts/plan.ts';

export type WhyRowKind = 'part' | 'subtotal' | 'total';
export type WhyRowGroup = 'base' | 'uplift' | 'rounding' | 'model' | 'override' | 'held' | 'unsaved';

/** A line of the table of parts. A part leads from one running total to the next; a total stands on the ground, the uplift on the base. */
export interface WhyRow {
  key: string;
  kind: WhyRowKind;
  group: WhyRowGroup;
  /** Name of a part of base or uplift; null of the others. */
  part: string | null;
  /** Of an override: its id, where the step is a single one. */
  overrideId: number | null;
  factor: number | null;
  from: number;
  to: number;
  /** The change, or the total, rounded for reading: what is shown adds up. */
  shown: number;
}

/**
 * The table of parts from the level to the plan. `shownPlan`: the number on screen, which changes not saved yet may have moved; `isEarlier`: it is that of
 * an earlier version, whose overrides aren't those of the answer, so they come as one. Parts that show as nothing are left out. Running totals are rounded,
 * and each part to the difference of two of them, so that what is shown adds up.
 */
export function listWhyRows(
  why: WhyNumber,
  { shownPlan, isEarlier }: { shownPlan: number; isEarlier: boolean },
): WhyRow[] {
  const digits = Math.abs(why.model) < 100 ? 1 : 0;
  const round = (units: number): number => Math.round(units * 10 ** digits) / 10 ** digits;
  const rows: WhyRow[] = [];
  let running = 0;
  const addPart = (
    key: string,
    group: WhyRowGroup,
    units: number,
    more: Partial<Pick<WhyRow, 'part' | 'overrideId' | 'factor'>> = {},
  ): void => {
    const to = running + units;
    const shown = round(round(to) - round(running));
    if (shown === 0 && more.part !== 'level') {
      running = to;
      return;
    }
    rows.push({
      key,
      kind: 'part',
      group,
      part: null,
      overrideId: null,
      factor: null,
      ...more,
      from: running,
      to,
      shown,
    });
    running = to;
  };
  const addSum = (
    group: WhyRowGroup,
    kind: WhyRowKind,
    from: number,
    to: number,
    factor: number | null = null,
  ): void => {
    const shown = round(round(to) - round(from));
    rows.push({ key: `sum ${group}`, kind, group, part: null, overrideId: null, factor, from, to, shown });
    running = to;
  };

  for (const { name, units, factor } of why.base.parts) addPart(name, 'base', units, { part: name, factor });
  addSum('base', 'subtotal', 0, why.base.units);
  for (const { name, units, factor } of why.uplift.parts) addPart(name, 'uplift', units, { part: name, factor });
  if (rows.at(-1).group === 'uplift') {
    addSum('uplift', 'subtotal', why.base.units, why.base.units + why.uplift.units, why.uplift.factor);
  }
  addPart('rounding', 'rounding', why.rounding);
  addSum('model', 'total', 0, why.model);
  if (isEarlier) {
    addPart('overrides', 'override', shownPlan - why.model);
    return rows;
  }
  why.overrides.steps.forEach(({ overrideIds, units }, index) => {
    const [only, ...others] = overrideIds;
    addPart(`override ${index}`, 'override', units, { overrideId: others.length === 0 ? (only ?? null) : null });
  });
  addPart('held', 'held', why.held);
  addPart('unsaved', 'unsaved', shownPlan - why.plan);
  return rows;
}

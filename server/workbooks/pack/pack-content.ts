import { createHash } from 'node:crypto';

/**
 * Everything that stands in a pack. The writer adds nothing to it but arithmetic: a pack can be made again from the same content.
 * All week-wise arrays run along `weekStarts`. Units and money are plain numbers; money is in `currency`.
 */
export interface PackContent {
  category: string;
  /** Counts within the category. */
  number: number;
  /** First days (`YYYY-MM-DD`) of the weeks of the pack, one after another without a gap. */
  weekStarts: string[];
  /** ISO 4217 code. */
  currency: string;
  /** Whether net value and prices hold VAT; null where it isn't known. */
  isVatIncluded: boolean | null;
  builtAt: Date;
  builtBy: string;
  /** IANA name of the zone in which times are shown. */
  timeZone: string;
  /** First day of the last week whose sales are in; null without sales. */
  salesThroughWeek: string | null;
  /** What the database says that the sheets must add up to, reckoned apart from `lines`. Net value null where no price is known. */
  controlTotals: { units: number; netValue: number | null };
  lines: PackLine[];
  overrides: PackOverride[];
  assumptions: PackAssumptions;
  /** Open remarks, a sentence each. */
  remarks: string[];
}

export interface PackLine {
  name: string;
  /** Number of the version of the plan that the figures come from. */
  version: number;
  state: 'draft' | 'submitted' | 'locked';
  lockedBy: string | null;
  lockedAt: Date | null;
  /** By week. */
  isWeekLocked: boolean[];
  /** One per item, or one per item and location. */
  rows: PackRow[];
  /** Units of the line's total that the model expects, by week; null where the line has no fit. */
  modelRange: { mean: number[]; p2_5: number[]; p10: number[]; p90: number[]; p97_5: number[] } | null;
  /** Units sold in the same week a year (52 weeks) before; null where unknown. */
  lastYearUnits: (number | null)[];
}

export interface PackRow {
  item: string;
  itemName: string;
  /** Null where the row holds all locations together. */
  location: string | null;
  /** The plan: units by week. */
  plan: number[];
  /** Price paid per unit that is expected, by week; null where unknown. Net value is units × this. */
  price: (number | null)[];
  isOverridden: boolean[];
  isPromoted: boolean[];
}

export interface PackOverride {
  line: string;
  author: string;
  at: Date;
  reason: string;
  note: string | null;
  /** In words: an item at a location, an item, the line's total. */
  scope: string;
  firstWeek: string;
  lastWeek: string;
  operation: 'set to' | 'add' | 'scale by';
  /** As put in: units for *set to* and *add*, a factor for *scale by*. */
  value: number;
  /** Units that it moves the plan by. */
  effectUnits: number;
}

export interface PackAssumptions {
  prices: {
    line: string;
    item: string;
    location: string | null;
    firstWeek: string;
    lastWeek: string;
    regularPrice: number | null;
    price: number | null;
  }[];
  promotions: {
    name: string;
    line: string;
    items: string;
    locations: string;
    firstWeek: string;
    lastWeek: string;
    mechanic: string;
    /** Share of the regular price, 0…1. */
    depthFraction: number | null;
    /** 0…1. */
    featureFraction: number | null;
    displayFraction: number | null;
  }[];
  holidays: { date: string; name: string }[];
  fits: {
    line: string;
    fittedAt: Date | null;
    weeks: number;
    series: number;
    /** Of ln(units); null without a fit. */
    adjustedRSquared: number | null;
    /** Standard error of the residuals, as a share of the units. */
    residualErrorFraction: number | null;
    /** Weighted absolute percentage error of the back-test, 0…; null where none was run. */
    backTestErrorFraction: number | null;
    remark: string | null;
  }[];
  findings: { line: string; detail: string }[];
}

/** SHA-256 of the figures and of what they were made from, whatever the workbook's look: equal for two packs that say the same. */
export function checksumContent(content: PackContent): string {
  const { category, weekStarts, currency, isVatIncluded, salesThroughWeek, lines, overrides, assumptions } = content;
  const said = { category, weekStarts, currency, isVatIncluded, salesThroughWeek, lines, overrides, assumptions };
  return createHash('sha256').update(JSON.stringify(said)).digest('hex');
}

/** Throws RangeError where an array doesn't run along the weeks or a figure is no number. */
export function checkContent(content: PackContent): void {
  const weeks = content.weekStarts.length;
  if (weeks === 0 || content.lines.length === 0) throw new RangeError('a pack needs at least one week and one line');
  for (const line of content.lines) {
    const { modelRange } = line;
    const along = [line.isWeekLocked, line.lastYearUnits, ...(modelRange ? Object.values(modelRange) : [])];
    for (const row of line.rows) {
      along.push(row.plan, row.price, row.isOverridden, row.isPromoted);
      if (!row.plan.every(Number.isFinite))
        throw new RangeError(`the plan of ${line.name}, ${row.item} holds something that is no number`);
    }
    if (along.some((values) => values.length !== weeks))
      throw new RangeError(`${line.name} doesn't run along the pack's ${weeks} weeks`);
  }
}

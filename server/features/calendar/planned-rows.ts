import type { PromotionWeek } from './promotion-runs.ts';

/** One row of a calendar file: what is planned for an item, a location and a week. */
export interface PlannedRow {
  itemId: number;
  /** null = every location. */
  locationId: number | null;
  weekStart: string;
  price: number | null;
  regularPrice: number | null;
  /** Price cut as a share of the regular price. */
  depth: number | null;
  feature: number | null;
  display: number | null;
  mechanics: Readonly<Record<string, number>> | null;
  promotionName: string | null;
}

export interface PlannedPrice {
  itemId: number;
  locationId: number | null;
  firstWeek: string;
  regularPrice: number;
}

export interface PlannedRows {
  promotions: PromotionWeek[];
  /** Weeks that the file says have no promotion. */
  unpromoted: { itemId: number; locationId: number; weekStart: string }[];
  prices: PlannedPrice[];
}

/** Stands for every location, beside the positive ids of single ones. */
export const everyLocation = 0;

/** A price this much below the regular one, as a share, is a cut and not rounding. */
const smallestDepth = 0.005;

/**
 * Tells promotions from plain weeks and finds where the regular price changes. A row is a promotion if it names one, cuts the price, or has a
 * feature, display or mechanic; a price without anything beside it is the regular one. Rows sorted by item, location and week.
 */
export function readPlannedRows(rows: readonly PlannedRow[]): PlannedRows {
  const result: PlannedRows = { promotions: [], unpromoted: [], prices: [] };
  for (const row of rows) {
    const { itemId, weekStart, regularPrice: regular, price } = row;
    const locationId = row.locationId ?? everyLocation;
    const depth = row.depth ?? cutOf(price, regular);
    const feature = row.feature ?? 0;
    const display = row.display ?? 0;
    const mechanics = keepPositive(row.mechanics ?? {});
    const isCut = depth !== null && depth > smallestDepth;
    const hasSupport = feature > 0 || display > 0 || Object.keys(mechanics).length > 0;
    const isPromoted = isCut || hasSupport || row.promotionName !== null;
    if (isPromoted) {
      const terms = { depth: isCut ? depth : (depth ?? null), feature, display, mechanics };
      const name = row.promotionName ?? nameTerms(terms);
      const isPriceStated = price !== null && price > 0;
      result.promotions.push({ itemId, locationId, weekStart, name, price: isPriceStated ? price : null, ...terms });
    } else {
      result.unpromoted.push({ itemId, locationId, weekStart });
    }
    const stated = regular ?? (isPromoted ? null : price);
    if (stated === null || !(stated > 0)) continue;
    const last = result.prices.at(-1);
    const isSameSeries = last?.itemId === itemId && last.locationId === row.locationId;
    if (isSameSeries && last.regularPrice === stated) continue;
    result.prices.push({ itemId, locationId: row.locationId, firstWeek: weekStart, regularPrice: stated });
  }
  return result;
}

function cutOf(price: number | null, regular: number | null): number | null {
  if (price === null || regular === null || !(price > 0) || !(regular > 0)) return null;
  return Math.round(Math.max(0, 1 - price / regular) * 1e6) / 1e6;
}

function keepPositive(mechanics: Readonly<Record<string, number>>): Record<string, number> {
  return Object.fromEntries(Object.entries(mechanics).filter(([, share]) => share > 0));
}

/** `20 % off, feature, coupon` for a promotion that the file gives no name. */
function nameTerms(terms: {
  depth: number | null;
  feature: number;
  display: number;
  mechanics: Readonly<Record<string, number>>;
}): string {
  return [
    ...(terms.depth !== null && terms.depth > smallestDepth ? [`${Math.round(terms.depth * 100)} % off`] : []),
    ...(terms.feature > 0 ? ['feature'] : []),
    ...(terms.display > 0 ? ['display'] : []),
    ...Object.keys(terms.mechanics)
      .sort()
      .map((name) => name.replaceAll('_', ' ')),
  ].join(', ');
}

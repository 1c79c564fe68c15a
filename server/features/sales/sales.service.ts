import { addWeeks, weeksBetween } from '../../../shared/domain/weeks.ts';
import type { Tx } from '../../lib/database.ts';
import type { SoldWeek } from '../../forecasting/types.ts';
import * as repository from './sales.repository.ts';

/** All sales in force of one series, as the forecasting arithmetic takes them. */
export interface LineHistorySeries {
  itemId: number;
  itemCode: string;
  itemName: string;
  unitStep: number;
  locationId: number;
  locationCode: string;
  locationName: string;
  /** First and last day of the listing; null = open. */
  listedFrom: string | null;
  listedTo: string | null;
  /** Ascending by week. A week that isn't here is unknown. */
  sold: SoldWeek[];
}

/**
 * Sales in force of a line's series, sorted by item and location code. Only items that are in the line at the end (or, with `through`, after
 * that week) and only their weeks in the line. through: last week to be read, inclusive.
 */
export async function loadLineHistory(
  tx: Tx,
  lineId: number,
  { through = null }: { through?: string | null } = {},
): Promise<LineHistorySeries[]> {
  const rows = await repository.selectLineHistory(tx, lineId, through);
  return rows.map(
    ({ weeks, units, prices, regularPrices, netValues, features, displays, gaps, daysOpen, mechanics, ...series }) => ({
      ...series,
      sold: weeks.map((weekStart, index) => ({
        weekStart,
        units: units[index] ?? Number.NaN,
        price: prices[index] ?? priceOf(netValues[index] ?? null, units[index] ?? 0),
        regularPrice: regularPrices[index] ?? Number.NaN,
        feature: features[index] ?? Number.NaN,
        display: displays[index] ?? Number.NaN,
        mechanics: mechanics?.[index] ?? {},
        gap: gaps[index] ?? 0,
        daysOpen: daysOpen[index] ?? 7,
      })),
    }),
  );
}

/** Price paid where only the net value is known: net value ÷ units of a week with positive both; else NaN. */
function priceOf(netValue: number | null, units: number): number {
  return netValue !== null && netValue > 0 && units > 0 ? netValue / units : Number.NaN;
}

/** History of one series for the grid: arrays over the weeks asked for. */
export interface SeriesSales {
  lineId: number;
  itemId: number;
  locationId: number;
  /** Units sold, null where nothing is known. */
  units: (number | null)[];
  /** Positions (0-based) of weeks with a gap, or with a promotion (feature, display, a mechanic, or a price 5 % below the regular one). */
  gapAt: number[];
  promotedAt: number[];
}

/** Sales in force of the lines' series in `weeks` weeks from firstWeek on; series without any sale in them are left out. */
export async function salesTotalsByWeek(
  tx: Tx,
  lineIds: readonly number[],
  firstWeek: string,
  weeks: number,
): Promise<SeriesSales[]> {
  if (lineIds.length === 0 || weeks <= 0) return [];
  const rows = await repository.selectSeriesWeeks(tx, lineIds, firstWeek, addWeeks(firstWeek, weeks));
  return rows.map((row) => {
    const positions = row.weeks.map((weekStart) => weeksBetween(firstWeek, weekStart));
    const units = Array.from<number | null>({ length: weeks }).fill(null);
    positions.forEach((position, index) => (units[position] = row.units[index] ?? null));
    const toPositions = (oneBased: number[] | null) => (oneBased ?? []).map((at) => positions[at - 1] ?? 0);
    return {
      lineId: row.lineId,
      itemId: row.itemId,
      locationId: row.locationId,
      units,
      gapAt: toPositions(row.gapAt),
      promotedAt: toPositions(row.promotedAt),
    };
  });
}

/** Weeks of one item of a line before endWeek, ascending, summed over the locations, with their promotion; depth null where prices are unknown. */
export function itemSalesByWeek(
  tx: Tx,
  lineId: number,
  itemId: number,
  locationIds: readonly number[],
  endWeek: string,
): Promise<repository.ItemWeekRow[]> {
  return repository.selectItemWeeks(tx, { lineId, itemId, locationIds, endWeek });
}

/** Units of a category, or of one line of it, by week, ascending, for the weekline. */
export function categorySalesByWeek(
  tx: Tx,
  categoryId: number,
  lineId: number | null = null,
): Promise<{ weekStart: string; units: number; isPromoted: boolean }[]> {
  return repository.selectCategoryWeeks(tx, categoryId, lineId);
}

/** Last accepted sales week of a category: the seam lies after it. null without sales. */
export function lastSalesWeek(tx: Tx, categoryId: number): Promise<string | null> {
  return repository.selectLastWeek(tx, categoryId);
}

/** The newest accept or withdraw; a fit names it. null before the first import. */
export function currentSalesRevision(tx: Tx): Promise<number | null> {
  return repository.selectCurrentRevision(tx);
}

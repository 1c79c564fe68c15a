import type { CalendarPromotion, CalendarView } from '../../../shared/contracts/calendar.ts';
import { addWeeks, listWeeks, startOfTradingWeek, toIsoDate, type Weekday } from '../../../shared/domain/weeks.ts';
import type { PlannedWeek } from '../../forecasting/types.ts';
import { demandRight, scopeOf, type Actor } from '../../lib/authorise.ts';
import { inTransaction, type Database, type Tx } from '../../lib/database.ts';
import { ProblemError } from '../../lib/problem.ts';
import * as repository from './calendar.repository.ts';
import { everyLocation, readPlannedRows, type PlannedRow } from './planned-rows.ts';
import { groupPromotionWeeks, type PromotionWeek } from './promotion-runs.ts';
import { listEventDays, listPublicHolidays, type HolidayDay } from './public-holidays.ts';

export type { PlannedRow };

/** What the calendar holds for one series in the weeks asked for; weeks without a promotion and without a planned regular price are left out. */
export interface PlannedSeries {
  itemId: number;
  locationId: number;
  planned: PlannedWeek[];
}

/**
 * Planned promotions and regular prices in force, by series, in `weeks` weeks from firstWeek on. A regular price holds from its week until the
 * next one; one that sales with a known regular price have overtaken is left out. Series without anything planned are left out.
 */
export async function loadPlannedWeeks(
  tx: Tx,
  itemIds: readonly number[],
  locationIds: readonly number[],
  firstWeek: string,
  weeks: number,
): Promise<PlannedSeries[]> {
  if (itemIds.length === 0 || locationIds.length === 0 || weeks <= 0) return [];
  const window = { itemIds, locationIds, firstWeek, lastWeek: addWeeks(firstWeek, weeks - 1) };
  const promotions = await repository.selectPromotionWeeks(tx, window);
  const prices = await repository.selectPlannedPrices(tx, window);

  const series = new Map<string, { itemId: number; locationId: number; byWeek: Map<string, PlannedWeek> }>();
  const at = ({ itemId, locationId }: { itemId: number; locationId: number }) => {
    const key = `${itemId}|${locationId}`;
    const found = series.get(key) ?? { itemId, locationId, byWeek: new Map<string, PlannedWeek>() };
    series.set(key, found);
    return found.byWeek;
  };
  for (const row of promotions) {
    at(row).set(row.weekStart, {
      weekStart: row.weekStart,
      price: row.price ?? Number.NaN,
      regularPrice: Number.NaN,
      depth: row.depth ?? Number.NaN,
      feature: row.feature,
      display: row.display,
      mechanics: row.mechanics,
    });
  }
  const weekStarts = listWeeks(firstWeek, weeks);
  prices.forEach((row, index) => {
    const next = prices[index + 1];
    const end = next?.itemId === row.itemId && next.locationId === row.locationId ? next.weekStart : null;
    const byWeek = at(row);
    for (const weekStart of weekStarts) {
      if (weekStart < row.weekStart || (end !== null && weekStart >= end)) continue;
      const planned = byWeek.get(weekStart) ?? planNothing(weekStart);
      byWeek.set(weekStart, { ...planned, regularPrice: row.regularPrice });
    }
  });
  return [...series.values()]
    .filter(({ byWeek }) => byWeek.size > 0)
    .map(({ itemId, locationId, byWeek }) => ({
      itemId,
      locationId,
      planned: [...byWeek.values()].sort((a, b) => a.weekStart.localeCompare(b.weekStart)),
    }));
}

function planNothing(weekStart: string): PlannedWeek {
  return {
    weekStart,
    price: Number.NaN,
    regularPrice: Number.NaN,
    depth: Number.NaN,
    feature: 0,
    display: 0,
    mechanics: {},
  };
}

/** Promotions in force in the window, equal terms joined over weeks, locations and items. */
export async function loadPromotions(
  tx: Tx,
  itemIds: readonly number[],
  locationIds: readonly number[],
  firstWeek: string,
  weeks: number,
): Promise<CalendarPromotion[]> {
  if (itemIds.length === 0 || locationIds.length === 0 || weeks <= 0) return [];
  const lastWeek = addWeeks(firstWeek, weeks - 1);
  const rows = await repository.selectPromotionWeeks(tx, { itemIds, locationIds, firstWeek, lastWeek });
  return groupPromotionWeeks(rows).map(({ price: _price, ...promotion }) => promotion);
}

/**
 * Public holidays of the country in the settings, and own events day by day, from `first` to `last` (days, both included) with the trading week that
 * holds each. Without a country: own events only.
 */
export async function holidaysBetween(tx: Tx, first: string, last: string): Promise<HolidayDay[]> {
  const { country, firstWeekday } = await repository.selectHolidaySettings(tx);
  const weekday = (firstWeekday ?? 1) as Weekday;
  const holidays = country === '' ? [] : listPublicHolidays(country, first, last, weekday);
  const events = (await repository.selectEvents(tx, first, last))
    .flatMap((event) => listEventDays(event, weekday))
    .filter(({ date }) => date >= first && date <= last);
  return [...holidays, ...events].sort((a, b) => a.date.localeCompare(b.date));
}

/** The newest revision of the calendar; null before the first. */
export function currentCalendarRevision(tx: Tx): Promise<number | null> {
  return repository.selectCurrentRevision(tx);
}

/** The calendar of a category; without a first week, from four weeks before the seam on. */
export function readCalendar(
  database: Database,
  actor: Actor,
  query: { categoryId: number; firstWeek: string | null; weeks: number },
): Promise<CalendarView> {
  return inTransaction(database, async (tx) => {
    const range = await repository.selectRange(tx, query.categoryId, scopeOf(actor, 'see-category'));
    const head = range[0];
    if (!head) throw new ProblemError('not-found', 'There is no such category, or you have no access to it.');
    demandRight(actor, 'see-category', query.categoryId);
    const lines = range.flatMap(({ lineId, lineName, items }) =>
      lineId === null || lineName === null ? [] : [{ id: lineId, name: lineName, items }],
    );
    const itemIds = lines.flatMap(({ items }) => items.map(({ id }) => id));
    const { firstWeekday } = await repository.selectHolidaySettings(tx);
    const firstWeek = startOfTradingWeek(
      query.firstWeek ?? (await chooseFirstWeek(tx, itemIds)),
      (firstWeekday ?? 1) as Weekday,
    );
    const lastWeek = addWeeks(firstWeek, query.weeks - 1);
    const locations = await repository.selectLocations(tx, itemIds);
    const locationIds = locations.map(({ id }) => id);
    return {
      category: { id: head.categoryId, name: head.categoryName },
      firstWeek,
      weeks: query.weeks,
      lines,
      locations,
      promotions: await loadPromotions(tx, itemIds, locationIds, firstWeek, query.weeks),
      prices: await repository.selectPriceChanges(tx, { itemIds, firstWeek, lastWeek }),
      holidays: (await holidaysBetween(tx, firstWeek, addWeeks(lastWeek, 1))).filter(
        ({ weekStart }) => weekStart >= firstWeek && weekStart <= lastWeek,
      ),
      revision: await currentCalendarRevision(tx),
    };
  });
}

async function chooseFirstWeek(tx: Tx, itemIds: readonly number[]): Promise<string> {
  const last = await repository.selectLastSalesWeek(tx, itemIds);
  return last === null ? toIsoDate(Math.floor(Date.now() / 86_400_000)) : addWeeks(last, -3);
}

/**
 * Writes a calendar file's rows as one revision: promotions joined by equal terms, regular prices where they change, and for weeks that the file
 * states without a promotion an entry that says so where one is in force. Rows sorted by item, location and week.
 */
export async function acceptPlannedRows(
  tx: Tx,
  actor: Actor,
  importId: number,
  rows: readonly PlannedRow[],
): Promise<{ revisionId: number }> {
  const { promotions, unpromoted, prices } = readPlannedRows(rows);
  const inForce = await loadPromotionKeys(tx, rows);
  const cancelled = unpromoted
    .filter((week) => inForce.has(keyOf(week)))
    .map((week): PromotionWeek => ({ ...week, ...noPromotion }));
  const revisionId = await repository.insertRevision(tx, { importId, change: 'accept', actorId: actor.id, note: null });
  const toEntries = (weeks: readonly PromotionWeek[], isNone: boolean) =>
    groupPromotionWeeks(weeks).map((run) => ({
      ...run,
      locationIds: run.locationIds.includes(everyLocation) ? null : run.locationIds,
      isNone,
    }));
  const revision = { revisionId, importId };
  await repository.insertPromotions(tx, revision, [...toEntries(promotions, false), ...toEntries(cancelled, true)]);
  await repository.insertPrices(tx, revision, prices);
  return { revisionId };
}

/** How many of the rows' keys have a promotion in force, and for how many of these the rows say something else. */
export async function comparePlannedRows(
  tx: Tx,
  rows: readonly PlannedRow[],
): Promise<{ keysHeld: number; keysChanged: number }> {
  const { promotions, unpromoted } = readPlannedRows(rows);
  const inForce = await loadPromotionKeys(tx, rows);
  const isOther = (week: PromotionWeek) => {
    const held = inForce.get(keyOf(week));
    return held !== undefined && held !== termsOf(week);
  };
  const changed = promotions.filter(isOther).length + unpromoted.filter((week) => inForce.has(keyOf(week))).length;
  const held = [...promotions, ...unpromoted].filter((week) => inForce.has(keyOf(week))).length;
  return { keysHeld: held, keysChanged: changed };
}

/** After a calendar import was marked withdrawn: its entries no longer count, which is a revision of its own. */
export async function noteCalendarWithdrawn(tx: Tx, actor: Actor, importId: number, why: string): Promise<void> {
  await repository.insertRevision(tx, { importId, change: 'withdraw', actorId: actor.id, note: why });
}

const noPromotion = { name: 'none', depth: null, price: null, feature: 0, display: 0, mechanics: {} };

/** Terms in force by key; a key of every location is held by a promotion at any one. */
async function loadPromotionKeys(tx: Tx, rows: readonly PlannedRow[]): Promise<Map<string, string>> {
  const weekStarts = rows.map(({ weekStart }) => weekStart).sort();
  const firstWeek = weekStarts[0];
  const lastWeek = weekStarts.at(-1);
  if (firstWeek === undefined || lastWeek === undefined) return new Map();
  const itemIds = [...new Set(rows.map(({ itemId }) => itemId))];
  const named = rows.flatMap(({ locationId }) => (locationId === null ? [] : [locationId]));
  const isAnywhere = rows.some(({ locationId }) => locationId === null);
  const sold = isAnywhere ? (await repository.selectLocations(tx, itemIds)).map(({ id }) => id) : [];
  const locationIds = [...new Set([...named, ...sold, ...(isAnywhere ? [everyLocation] : [])])];
  const held = await repository.selectPromotionWeeks(tx, { itemIds, locationIds, firstWeek, lastWeek });
  const keys = new Map<string, string>();
  for (const week of held) {
    keys.set(keyOf(week), termsOf(week));
    if (isAnywhere) keys.set(keyOf({ ...week, locationId: everyLocation }), termsOf(week));
  }
  return keys;
}

function keyOf({ itemId, locationId, weekStart }: { itemId: number; locationId: number; weekStart: string }): string {
  return `${itemId}|${locationId}|${weekStart}`;
}

function termsOf({ name, depth, price, feature, display, mechanics }: Omit<PromotionWeek, 'itemId'>): string {
  return JSON.stringify([name, depth, price, feature, display, Object.entries(mechanics).sort()]);
}

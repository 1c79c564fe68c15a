import type { CalendarHoliday, CalendarPromotion } from '../../../shared/contracts/calendar.ts';
import type { HolidayWeek, PlannedWeek } from '../../forecasting/types.ts';
import type { Tx } from '../../lib/database.ts';

/** What the calendar holds for one series in the weeks asked for; weeks without a promotion and without a planned regular price are left out. */
export interface PlannedSeries {
  itemId: number;
  locationId: number;
  planned: PlannedWeek[];
}

export declare function loadPlannedWeeks(
  tx: Tx,
  itemIds: readonly number[],
  locationIds: readonly number[],
  firstWeek: string,
  weeks: number,
): Promise<PlannedSeries[]>;

/** Promotions in force in the window, equal terms joined over items, locations and weeks. */
export declare function loadPromotions(
  tx: Tx,
  itemIds: readonly number[],
  locationIds: readonly number[],
  firstWeek: string,
  weeks: number,
): Promise<CalendarPromotion[]>;

/** Public holidays of the country in the settings from `first` to `last` (days), by trading week. Empty without a country. */
export declare function holidaysBetween(
  tx: Tx,
  first: string,
  last: string,
): Promise<(HolidayWeek & CalendarHoliday)[]>;

/** The newest revision of the calendar; null before the first. */
export declare function currentCalendarRevision(tx: Tx): Promise<number | null>;

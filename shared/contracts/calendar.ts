import { z } from 'zod';
import { Id, Named, WeekStart } from './primitives.ts';

/** A promotion in force: the same terms over items × locations × a run of weeks. */
export const CalendarPromotion = z.object({
  name: z.string(),
  firstWeek: WeekStart,
  lastWeek: WeekStart,
  itemIds: z.array(Id),
  locationIds: z.array(Id),
  /** Price cut as a share of the regular price; null where unknown. */
  depth: z.number().nullable(),
  feature: z.number(),
  display: z.number(),
  mechanics: z.record(z.string(), z.number()),
});
export type CalendarPromotion = z.infer<typeof CalendarPromotion>;

export const CalendarHoliday = z.object({ name: z.string(), weekStart: WeekStart, date: z.string() });
export type CalendarHoliday = z.infer<typeof CalendarHoliday>;

export const CalendarView = z.object({
  category: Named,
  firstWeek: WeekStart,
  weeks: z.number().int(),
  lines: z.array(z.object({ id: Id, name: z.string(), items: z.array(Named) })),
  locations: z.array(Named),
  promotions: z.array(CalendarPromotion),
  prices: z.array(z.object({ itemId: Id, locationId: Id.nullable(), weekStart: WeekStart, regularPrice: z.number() })),
  holidays: z.array(CalendarHoliday),
  revision: z.number().int().nullable(),
});
export type CalendarView = z.infer<typeof CalendarView>;

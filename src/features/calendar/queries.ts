import { queryOptions } from '@tanstack/react-query';
import { CalendarView } from '../../../shared/contracts/calendar.ts';
import { request } from '../../lib/api.ts';

/** What is on the calendar of a category in `weeks` weeks from `firstWeek` on. */
export const calendarQuery = (span: { categoryId: number; firstWeek: string; weeks: number }) =>
  queryOptions({
    queryKey: ['calendar', span.categoryId, span.firstWeek, span.weeks],
    queryFn: ({ signal }) => request(CalendarView, '/calendar', { signal, query: span }),
  });

import { Router } from 'express';
import { z } from 'zod';
import { IdText, WeekStart } from '../../../shared/contracts/primitives.ts';
import { actorOf } from '../../lib/http.ts';
import type { Deps } from '../../lib/deps.ts';
import { parseRequest } from '../../lib/problem.ts';
import { readCalendar } from './calendar.service.ts';

const CalendarQuery = z.object({
  categoryId: IdText,
  firstWeek: WeekStart.optional(),
  weeks: z.coerce.number().int().min(1).max(260).default(26),
});

export function calendarRouter({ database }: Deps): Router {
  const router = Router();
  router.get('/calendar', async (request, response) => {
    const { categoryId, firstWeek, weeks } = parseRequest(CalendarQuery, request.query);
    response.json(await readCalendar(database, actorOf(request), { categoryId, firstWeek: firstWeek ?? null, weeks }));
  });
  return router;
}

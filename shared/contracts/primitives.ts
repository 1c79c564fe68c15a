import { z } from 'zod';
import { isIsoDate } from '../domain/weeks.ts';

/** First day of a trading week, `YYYY-MM-DD`. */
export const WeekStart = z.string().refine(isIsoDate, { error: 'must be a date written YYYY-MM-DD' });
export const Id = z.number().int().positive();
/** An id in a path or a query string. */
export const IdText = z.coerce.number().int().positive();
/** ISO 8601 instant. */
export const Instant = z.string();
export const Named = z.object({ id: Id, name: z.string() });
export type Named = z.infer<typeof Named>;
/** A name that people give, trimmed. */
export const Name = z.string().trim().min(1).max(200);
export const Note = z.string().trim().max(2000);

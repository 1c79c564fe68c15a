import { toIsoDate } from '../../shared/domain/weeks.ts';

/** The date on the person's own clock, `YYYY-MM-DD`. */
export function readToday(now: Date = new Date()): string {
  return toIsoDate(Math.floor((now.getTime() - now.getTimezoneOffset() * 60_000) / 86_400_000));
}

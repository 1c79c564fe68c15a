import type { Migration } from '../lib/migrate.ts';
import { peopleAndRange } from './0001-people-and-range.ts';
import { salesAndCalendar } from './0002-sales-and-calendar.ts';
import { fitsAndPlan } from './0003-fits-and-plan.ts';
import { appendOnlyAndGrants } from './0004-append-only-and-grants.ts';

/** In the order in which they are applied. */
export const migrations: readonly Migration[] = [peopleAndRange, salesAndCalendar, fitsAndPlan, appendOnlyAndGrants];

import { z } from 'zod';
import { Id, Instant } from './primitives.ts';

export const waitingKinds = [
  'import-to-check',
  'no-sales-yet',
  'forecast-behind-sales',
  'no-forecast-yet',
  'line-to-submit',
  'line-returned',
  'line-to-review',
  'override-needs-decision',
  'override-due-another-look',
  'pack-to-build',
  'pack-ready',
  'set-up-category',
  'set-up-people',
] as const;

/** One thing that waits for the person. The client words it by `kind` and links to `link`. */
export const WaitingEntry = z.object({
  kind: z.enum(waitingKinds),
  categoryId: Id.nullable(),
  categoryName: z.string().nullable(),
  subject: z.string(),
  detail: z.string().nullable(),
  count: z.number().int(),
  /** Money at stake where it is known; entries are ranked by it. */
  stake: z.number().nullable(),
  at: Instant.nullable(),
  link: z.string(),
});
export type WaitingEntry = z.infer<typeof WaitingEntry>;

export const WaitingList = z.object({ entries: z.array(WaitingEntry) });
export type WaitingList = z.infer<typeof WaitingList>;

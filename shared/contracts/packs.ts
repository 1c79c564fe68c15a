import { z } from 'zod';
import { Job } from './jobs.ts';
import { Id, Instant, Named, WeekStart } from './primitives.ts';

export const Pack = z.object({
  id: Id,
  /** Counts within the category. */
  number: z.number().int(),
  category: Named,
  firstWeek: WeekStart,
  lastWeek: WeekStart,
  fileName: z.string(),
  sizeBytes: z.number().int(),
  sha256: z.string(),
  at: Instant,
  by: z.string(),
  lines: z.array(
    z.object({ id: Id, name: z.string(), version: z.number().int(), units: z.number(), isLocked: z.boolean() }),
  ),
  units: z.number(),
  netValue: z.number().nullable(),
});
export type Pack = z.infer<typeof Pack>;

/** What could go into the next pack: locked weeks by line. */
export const PackOffer = z.object({
  categoryId: Id,
  firstWeek: WeekStart.nullable(),
  lastWeek: WeekStart.nullable(),
  lines: z.array(
    z.object({
      id: Id,
      name: z.string(),
      lockedVersion: z.number().int().nullable(),
      firstLockedWeek: WeekStart.nullable(),
      lastLockedWeek: WeekStart.nullable(),
      lockedBy: z.string().nullable(),
      lockedAt: Instant.nullable(),
    }),
  ),
});
export type PackOffer = z.infer<typeof PackOffer>;

export const PackList = z.object({
  packs: z.array(Pack),
  offer: PackOffer.nullable(),
  mayBuild: z.boolean(),
  mayDownload: z.boolean(),
  activeJob: Job.nullable(),
});
export type PackList = z.infer<typeof PackList>;

export const BuildPack = z.object({
  categoryId: Id,
  firstWeek: WeekStart,
  lastWeek: WeekStart,
  lineIds: z.array(Id).min(1, { error: 'choose at least one line' }),
});
export type BuildPack = z.infer<typeof BuildPack>;

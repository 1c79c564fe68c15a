import { z } from 'zod';
import { Id, Instant } from './primitives.ts';

/** Work in the background. `progress` runs from 0 to 1; `message` is a key of the client's texts with its values. */
export const Job = z.object({
  id: Id,
  kind: z.enum(['import.read', 'import.accept', 'import.withdraw', 'forecast.category', 'pack.build']),
  state: z.enum(['queued', 'running', 'done', 'failed']),
  progress: z.number().min(0).max(1),
  message: z.object({ key: z.string(), values: z.record(z.string(), z.union([z.string(), z.number()])) }).nullable(),
  /** What it made: e.g. `{ packId: 3 }`. */
  result: z.record(z.string(), z.unknown()).nullable(),
  problem: z.object({ type: z.string(), detail: z.string() }).nullable(),
  startedAt: Instant.nullable(),
  endedAt: Instant.nullable(),
});
export type Job = z.infer<typeof Job>;

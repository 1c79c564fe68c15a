import { z } from 'zod';

export const ProblemDetail = z.object({
  pointer: z.string().optional(),
  sheet: z.string().optional(),
  cell: z.string().optional(),
  detail: z.string(),
});
export type ProblemDetail = z.infer<typeof ProblemDetail>;

/** RFC 9457 problem details as every route answers them. `type` is `/problems/<key of the table in shared/problems.ts>`. */
export const Problem = z.object({
  type: z.string(),
  title: z.string(),
  status: z.number().int(),
  detail: z.string(),
  instance: z.string(),
  errors: z.array(ProblemDetail).optional(),
  errorCount: z.number().int().optional(),
  /** Further members, e.g. `conflicts` of a refused save. */
  conflicts: z.array(z.unknown()).optional(),
});
export type Problem = z.infer<typeof Problem>;

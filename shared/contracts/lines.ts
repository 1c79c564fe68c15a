import { z } from 'zod';
import { Id, Instant, Name, Named, WeekStart } from './primitives.ts';
import { Job } from './jobs.ts';

export const Category = z.object({
  id: Id,
  name: z.string(),
  lines: z.array(Named),
  /** Last accepted sales week of the category; the seam lies after it. */
  lastSalesWeek: WeekStart.nullable(),
});
export type Category = z.infer<typeof Category>;
export const CategoryList = z.object({
  categories: z.array(Category),
  /** 0 = Sunday … 6 = Saturday; null until the first import fixes it. */
  firstWeekday: z.number().int().min(0).max(6).nullable(),
});
export type CategoryList = z.infer<typeof CategoryList>;

export const CreateCategory = z.object({ name: Name });
export const CreateLine = z.object({ categoryId: Id, name: Name });

export const FittedCoefficient = z.object({
  name: z.string(),
  group: z.string(),
  estimate: z.number(),
  standardError: z.number(),
  low95: z.number(),
  high95: z.number(),
});
export const Finding = z.object({
  kind: z.string(),
  item: z.string().optional(),
  location: z.string().optional(),
  values: z.record(z.string(), z.union([z.string(), z.number()])).optional(),
});
export type Finding = z.infer<typeof Finding>;

/** What the line page shows of the newest fit. */
export const LineFitView = z.object({
  line: Named,
  category: Named,
  fit: z
    .object({
      id: Id,
      at: Instant,
      salesTo: WeekStart,
      rows: z.number(),
      rank: z.number(),
      sigma: z.number(),
      rSquared: z.number(),
      aic: z.number(),
      seconds: z.number(),
      specification: z.record(z.string(), z.unknown()),
      coefficients: z.array(FittedCoefficient),
      scores: z.array(z.object({ specification: z.string(), crps: z.number(), wape: z.number() })),
      findings: z.array(Finding),
    })
    .nullable(),
  activeJob: Job.nullable(),
});
export type LineFitView = z.infer<typeof LineFitView>;

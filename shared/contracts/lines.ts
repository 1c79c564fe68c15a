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

const Maybe = z.number().nullable();
/** Mean weight of the members' own evidence, 0…1, and the members with the lowest and the highest slope. */
const EffectEvidence = z.object({
  own: z.number(),
  withOwnSlope: z.number(),
  members: z.number(),
  lowest: z.object({ name: z.string(), slope: z.number() }),
  highest: z.object({ name: z.string(), slope: z.number() }),
});
export type EffectEvidence = z.infer<typeof EffectEvidence>;

/** One effect of the line in ln units; errors of five kinds, null where they aren't defined. */
const DiagnosedEffect = z.object({
  name: z.string(),
  group: z.string(),
  estimate: z.number(),
  errors: z.object({ classical: Maybe, hc1: Maybe, hc3: Maybe, week: Maybe, neweyWest: Maybe }).nullable(),
  varianceInflation: Maybe,
  inseparableFrom: z.array(z.string()),
  items: EffectEvidence.nullable(),
  locations: EffectEvidence.nullable(),
});
export type DiagnosedEffect = z.infer<typeof DiagnosedEffect>;

const ChiSquareTest = z.object({ statistic: z.number(), degrees: z.number(), p: z.number() });

export const FitDiagnosis = z.object({
  rows: z.number(),
  series: z.number(),
  items: z.number(),
  weeks: z.number(),
  parameters: z.number(),
  residualDegrees: z.number(),
  rSquaredWithin: Maybe,
  adjustedRSquaredWithin: Maybe,
  rSquared: Maybe,
  adjustedRSquared: Maybe,
  likelihood: z.object({ logLikelihood: z.number(), aic: z.number(), aicc: Maybe, bic: z.number() }).nullable(),
  effects: z.array(DiagnosedEffect),
  neweyWestLag: z.number(),
  condition: z.array(
    z.object({ index: z.number(), shares: z.array(z.object({ name: z.string(), share: z.number() })) }),
  ),
  durbinWatson: Maybe,
  breuschPagan: ChiSquareTest.nullable(),
  ljungBox: ChiSquareTest.extend({ lags: z.number() }).nullable(),
  leverage: z.object({ threshold: z.number(), above: z.number(), largest: z.number() }),
  influential: z.array(
    z.object({
      item: z.string(),
      location: z.string(),
      weekStart: WeekStart,
      residual: z.number(),
      leverage: z.number(),
      cooksDistance: z.number(),
    }),
  ),
});
export type FitDiagnosis = z.infer<typeof FitDiagnosis>;

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
      diagnosis: FitDiagnosis.nullable(),
    })
    .nullable(),
  /** Names by code of the items and locations that the fit speaks of. */
  names: z.object({ items: z.record(z.string(), z.string()), locations: z.record(z.string(), z.string()) }),
  activeJob: Job.nullable(),
});
export type LineFitView = z.infer<typeof LineFitView>;

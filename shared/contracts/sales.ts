import { z } from 'zod';
import { columnMeanings } from '../domain/column-meanings.ts';
import { Job } from './jobs.ts';
import { Id, Instant, Name, Note, WeekStart } from './primitives.ts';

export const ColumnMeaning = z.enum(columnMeanings);
export type ColumnMeaning = z.infer<typeof ColumnMeaning>;

export const importKinds = ['sales', 'calendar'] as const;
export const ImportKind = z.enum(importKinds);
export type ImportKind = z.infer<typeof ImportKind>;

/** How a file is read. Proposed by the server, corrected by hand on the preview. */
export const ImportMapping = z.object({
  kind: ImportKind,
  sheet: z.string().nullable(),
  /** 1-based row of the column names. */
  headerRow: z.number().int().positive(),
  columns: z.array(
    z.object({
      /** 0-based position. */
      index: z.number().int().min(0),
      header: z.string(),
      meaning: ColumnMeaning,
      /** Only of a mechanic: its name, e.g. `coupon`. */
      mechanicName: z.string().optional(),
      /** Only of shares: whether bare figures are fractions or percents. */
      scale: z.enum(['fraction', 'percent']).optional(),
      confidence: z.number().min(0).max(1),
    }),
  ),
  decimalMark: z.enum(['.', ',']),
  weekDateIs: z.enum(['first-day', 'last-day']),
  /** 0 = Sunday … 6 = Saturday: first day of the trading week. */
  firstWeekday: z.number().int().min(0).max(6),
  /** How dates such as 3/4/2026 are meant, and what `202611` counts; proposed from the file where left out. */
  dateOrder: z.enum(['day-first', 'month-first']).optional(),
  yearNumberIs: z.enum(['week', 'month']).optional(),
  /** Further sheets with the same columns, read with the first. */
  moreSheets: z.array(z.object({ name: z.string(), headerRow: z.number().int().positive() })).optional(),
  valueIncludesVat: z.boolean(),
  /** Where the file names none: the category, line and location of all its rows. */
  categoryId: Id.nullable(),
  lineId: Id.nullable(),
  /** Name of a line to be made, if the chosen category has none that fits. */
  newLineName: Name.nullable(),
});
export type ImportMapping = z.infer<typeof ImportMapping>;

/** received → reading → to-check → accepting → accepted → withdrawn; refused = unreadable; discarded = dropped before acceptance. */
export const importStates = [
  'reading',
  'to-check',
  'accepting',
  'accepted',
  'withdrawing',
  'withdrawn',
  'refused',
  'discarded',
] as const;
export const ImportState = z.enum(importStates);
export type ImportState = z.infer<typeof ImportState>;

export const ImportTotals = z.object({
  rowsRead: z.number().int(),
  rowsTaken: z.number().int(),
  rowsRefused: z.number().int(),
  rowsRepaired: z.number().int(),
  weeks: z.number().int(),
  items: z.number().int(),
  locations: z.number().int(),
  units: z.number(),
  netValue: z.number(),
  firstWeek: WeekStart.nullable(),
  lastWeek: WeekStart.nullable(),
  /** Keys (item × location × week) already held, and how many of them change. */
  keysHeld: z.number().int(),
  keysChanged: z.number().int(),
  /** By week: units of the file beside the units held before. */
  byWeek: z.array(
    z.object({ weekStart: WeekStart, units: z.number(), unitsHeld: z.number().nullable(), rows: z.number().int() }),
  ),
});
export type ImportTotals = z.infer<typeof ImportTotals>;

/** What the file names and Fairweek doesn't know yet; made only after a yes. */
export const UnknownNames = z.object({
  categories: z.array(z.string()),
  lines: z.array(z.object({ category: z.string(), line: z.string() })),
  items: z.array(z.object({ item: z.string(), name: z.string().nullable(), line: z.string().nullable() })),
  locations: z.array(z.string()),
});
export type UnknownNames = z.infer<typeof UnknownNames>;

export const ImportFinding = z.object({
  sheet: z.string().nullable(),
  cell: z.string().nullable(),
  row: z.number().int().nullable(),
  kind: z.string(),
  before: z.string().nullable(),
  after: z.string().nullable(),
  verdict: z.enum(['refused', 'repaired', 'noticed']),
  detail: z.string(),
});
export type ImportFinding = z.infer<typeof ImportFinding>;

export const ImportSummary = z.object({
  id: Id,
  kind: ImportKind,
  fileName: z.string(),
  sha256: z.string(),
  sizeBytes: z.number().int(),
  state: ImportState,
  at: Instant,
  by: z.string(),
  acceptedAt: Instant.nullable(),
  rowsTaken: z.number().int().nullable(),
  rowsRefused: z.number().int().nullable(),
  firstWeek: WeekStart.nullable(),
  lastWeek: WeekStart.nullable(),
  units: z.number().nullable(),
});
export type ImportSummary = z.infer<typeof ImportSummary>;

export const ImportDetail = ImportSummary.extend({
  mapping: ImportMapping.nullable(),
  /** First rows below the header as text, for the preview. */
  sample: z.array(z.array(z.string())),
  sheets: z.array(z.object({ name: z.string(), isHidden: z.boolean(), rows: z.number().int().nullable() })),
  totals: ImportTotals.nullable(),
  unknown: UnknownNames.nullable(),
  findingCounts: z.array(z.object({ kind: z.string(), verdict: z.string(), count: z.number().int() })),
  /** The first 100. */
  findings: z.array(ImportFinding),
  /** Why it was refused, what one can do. */
  refusal: z.string().nullable(),
  /** An identical file accepted before. */
  sameFileAs: Id.nullable(),
  /** Weeks of the file that are locked in a plan (their sales are still accepted). */
  lockedWeeks: z.array(WeekStart),
  mayAccept: z.boolean(),
  mayWithdraw: z.boolean(),
  activeJob: Job.nullable(),
});
export type ImportDetail = z.infer<typeof ImportDetail>;

export const ImportList = z.object({
  imports: z.array(ImportSummary),
  /** The state of the data of the chosen category. */
  health: z
    .object({
      firstWeek: WeekStart.nullable(),
      lastWeek: WeekStart.nullable(),
      items: z.number().int(),
      locations: z.number().int(),
      entriesInForce: z.number().int(),
      gapWeeks: z.number().int(),
      missingWeeks: z.number().int(),
    })
    .nullable(),
  mayImport: z.boolean(),
});
export type ImportList = z.infer<typeof ImportList>;

export const AcceptImport = z.object({ createUnknown: z.boolean(), note: Note.optional() });
export type AcceptImport = z.infer<typeof AcceptImport>;
export const WithdrawImport = z.object({ reason: Note.min(1, { error: 'say why' }) });
export type WithdrawImport = z.infer<typeof WithdrawImport>;

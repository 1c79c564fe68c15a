import { z } from 'zod';
import { CalendarHoliday, CalendarPromotion } from './calendar.ts';
import { Job } from './jobs.ts';
import { Finding } from './lines.ts';
import { Id, IdText, Instant, Named, Note, WeekStart } from './primitives.ts';

export const LineState = z.enum(['draft', 'submitted', 'locked']);
export type LineState = z.infer<typeof LineState>;

/** Both null = the whole line; item only = the item over its locations; location only = the location over its items; both = one series. */
export const OverrideScope = z.object({ itemId: Id.nullable(), locationId: Id.nullable() });
export type OverrideScope = z.infer<typeof OverrideScope>;

export const OverrideOperation = z.enum(['set to', 'add', 'scale by', 'clear']);
export type OverrideOperation = z.infer<typeof OverrideOperation>;

/** One change, applied to every week from first to last: the week's total of the scope is set to, raised by, or multiplied by `value`. */
export const NewOverride = z.object({
  scope: OverrideScope,
  firstWeek: WeekStart,
  lastWeek: WeekStart,
  operation: OverrideOperation,
  /** Units for set to and add, a factor for scale by, null for clear. */
  value: z.number().nullable(),
  reasonId: Id.nullable(),
  note: Note.nullable(),
});
export type NewOverride = z.infer<typeof NewOverride>;

export const SaveOverrides = z.object({
  /** Number of the version that the grid showed. */
  baseVersion: z.number().int().min(0),
  overrides: z.array(NewOverride).min(1).max(20_000),
});
export type SaveOverrides = z.infer<typeof SaveOverrides>;

export const OverrideInForce = NewOverride.extend({
  id: Id,
  /** Order of application within the line, ascending. */
  sequence: z.number().int(),
  version: z.number().int(),
  author: z.string(),
  at: Instant,
  reason: z.string().nullable(),
  /** Model of the scope when the override was made, by week. */
  baseModel: z.array(z.number()),
  /** The model has moved by more than the threshold since. */
  isDueAnotherLook: z.boolean(),
  /** It can't be met on the present model; why. */
  needsDecision: z.string().nullable(),
});
export type OverrideInForce = z.infer<typeof OverrideInForce>;

export const VersionSummary = z.object({
  number: z.number().int(),
  parent: z.number().int().nullable(),
  kind: z.enum(['forecast', 'overrides', 'adjustment']),
  author: z.string(),
  at: Instant,
  reason: z.string().nullable(),
  note: z.string().nullable(),
  runId: Id,
  /** Cells changed and the sum of the change, units. */
  changedCells: z.number().int(),
  changedUnits: z.number(),
  /** Weeks of this version that are locked. */
  isLockedVersion: z.boolean(),
});
export type VersionSummary = z.infer<typeof VersionSummary>;

export const Round = z.object({
  id: Id,
  opens: z.string(),
  due: z.string(),
  firstWeek: WeekStart,
  lastWeek: WeekStart,
});
export type Round = z.infer<typeof Round>;

export const LockRange = z.object({
  firstWeek: WeekStart,
  lastWeek: WeekStart,
  version: z.number().int(),
  actor: z.string(),
  at: Instant,
});
export type LockRange = z.infer<typeof LockRange>;

export const PlanSeries = z.object({
  itemId: Id,
  locationId: Id,
  method: z.string(),
  /** History, from `historyFirstWeek`: units sold, null where nothing is known. */
  units: z.array(z.number().nullable()),
  /** Positions within the history whose week had a gap, or a promotion. */
  gapAt: z.array(z.number().int()),
  promotedAt: z.array(z.number().int()),
  /** Plan weeks, from `planFirstWeek`. Model is rounded to the unit step. */
  model: z.array(z.number()),
  base: z.array(z.number()),
  plan: z.array(z.number()),
  p2_5: z.array(z.number()),
  p10: z.array(z.number()),
  p50: z.array(z.number()),
  p90: z.array(z.number()),
  p97_5: z.array(z.number()),
  lastYear: z.array(z.number().nullable()),
  /** Expected price paid, money per unit; null where unknown. */
  price: z.array(z.number().nullable()),
  /** Marks by position in the plan weeks. */
  marks: z.record(z.string(), z.array(z.string())),
});
export type PlanSeries = z.infer<typeof PlanSeries>;

/** Range of the model's total. */
export const TotalRange = z.object({
  scope: OverrideScope,
  p2_5: z.array(z.number()),
  p10: z.array(z.number()),
  p50: z.array(z.number()),
  p90: z.array(z.number()),
  p97_5: z.array(z.number()),
});
export type TotalRange = z.infer<typeof TotalRange>;

export const Weekline = z.object({
  firstWeek: WeekStart,
  /** Units sold from the first sale to the seam; null where nothing is known. */
  sold: z.array(z.number().nullable()),
  /** Units planned from the seam on. */
  planned: z.array(z.number()),
  promotedWeeks: z.array(WeekStart),
  lockedWeeks: z.array(WeekStart),
  holidays: z.array(CalendarHoliday),
});
export type Weekline = z.infer<typeof Weekline>;

export const HandOver = z.object({
  state: z.enum(['submitted', 'returned', 'lapsed']),
  version: z.number().int(),
  actor: z.string(),
  at: Instant,
  comment: z.string().nullable(),
});
export type HandOver = z.infer<typeof HandOver>;

export const LinePlan = z.object({
  line: Named,
  category: Named,
  state: LineState,
  version: VersionSummary.nullable(),
  run: z.object({ id: Id, at: Instant, salesTo: WeekStart, calendarRevision: z.number().int().nullable() }).nullable(),
  historyFirstWeek: WeekStart.nullable(),
  /** First planned week: the week after the category's last accepted sales week at the time of the run. */
  planFirstWeek: WeekStart.nullable(),
  planWeeks: z.number().int(),
  items: z.array(z.object({ id: Id, code: z.string(), name: z.string(), unitStep: z.number() })),
  locations: z.array(Named),
  series: z.array(PlanSeries),
  totals: z.array(TotalRange),
  overrides: z.array(OverrideInForce),
  promotions: z.array(CalendarPromotion),
  holidays: z.array(CalendarHoliday),
  lockedWeeks: z.array(WeekStart),
  locks: z.array(LockRange),
  round: Round.nullable(),
  handOver: HandOver.nullable(),
  findings: z.array(Finding),
  weekline: Weekline.nullable(),
  /** Newer sales are in than the run has read. */
  isBehindSales: z.boolean(),
  activeJob: Job.nullable(),
  may: z.object({
    override: z.boolean(),
    submit: z.boolean(),
    returnLine: z.boolean(),
    lock: z.boolean(),
    unlock: z.boolean(),
    forecast: z.boolean(),
  }),
});
export type LinePlan = z.infer<typeof LinePlan>;

/** Answer to a save: the new version, and the plan as it now is for every series whose numbers changed. */
export const SavedOverrides = z.object({
  version: VersionSummary,
  changed: z.array(z.object({ itemId: Id, locationId: Id, plan: z.array(z.number()) })),
  overrides: z.array(OverrideInForce),
});
export type SavedOverrides = z.infer<typeof SavedOverrides>;

/** One of the `conflicts` of a `stale-cells` problem: somebody else changed the cell, or something under the total, since the base version. */
export const CellConflict = z.object({
  scope: OverrideScope,
  weekStart: WeekStart,
  /** Plan of the scope in that week by this save, by the other person, and in the base version. */
  yours: z.number(),
  theirs: z.number(),
  before: z.number(),
  theirAuthor: z.string(),
  theirAt: Instant,
  theirReason: z.string().nullable(),
  theirNote: z.string().nullable(),
  theirVersion: z.number().int(),
});
export type CellConflict = z.infer<typeof CellConflict>;

export const VersionList = z.object({ versions: z.array(VersionSummary) });
export type VersionList = z.infer<typeof VersionList>;

/** A version rebuilt from its chain. */
export const VersionState = z.object({
  version: VersionSummary,
  planFirstWeek: WeekStart,
  planWeeks: z.number().int(),
  series: z.array(z.object({ itemId: Id, locationId: Id, plan: z.array(z.number()) })),
});
export type VersionState = z.infer<typeof VersionState>;

export const SubmitLine = z.object({ version: z.number().int().positive(), comment: Note.nullable() });
export const ReturnLine = z.object({ comment: Note.min(1, { error: 'say what should change' }) });
export const LockLine = z.object({
  version: z.number().int().positive(),
  firstWeek: WeekStart,
  lastWeek: WeekStart,
  comment: Note.nullable(),
});
export const UnlockLine = z.object({
  firstWeek: WeekStart,
  lastWeek: WeekStart,
  reason: Note.min(1, { error: 'say why' }),
});
export const StartForecast = z.object({ horizonWeeks: z.number().int().min(4).max(26) });
export const ChangeRound = z.object({ due: WeekStart, firstWeek: WeekStart, lastWeek: WeekStart });

export const CategoryPlan = z.object({
  category: Named,
  round: Round.nullable(),
  historyFirstWeek: WeekStart.nullable(),
  planFirstWeek: WeekStart.nullable(),
  planWeeks: z.number().int(),
  lines: z.array(
    z.object({
      id: Id,
      name: z.string(),
      state: LineState,
      version: VersionSummary.nullable(),
      /** From `historyFirstWeek` and from `planFirstWeek`. */
      sold: z.array(z.number().nullable()),
      model: z.array(z.number()),
      plan: z.array(z.number()),
      lastYear: z.array(z.number().nullable()),
      lockedWeeks: z.array(WeekStart),
      overrides: z.number().int(),
      dueAnotherLook: z.number().int(),
      handOver: HandOver.nullable(),
      findings: z.array(Finding),
    }),
  ),
  weekline: Weekline.nullable(),
  lastSalesWeek: WeekStart.nullable(),
  isBehindSales: z.boolean(),
  activeJob: Job.nullable(),
  may: z.object({ forecast: z.boolean(), changeRound: z.boolean() }),
});
export type CategoryPlan = z.infer<typeof CategoryPlan>;

export const BasePartName = z.enum(['level', 'price', 'season', 'holiday', 'trend', 'recent level']);
export type BasePartName = z.infer<typeof BasePartName>;
export const UpliftPartName = z.enum(['promotion', 'around', 'neighbours']);
export type UpliftPartName = z.infer<typeof UpliftPartName>;

const partOf = <Name extends z.ZodType<string>>(name: Name) =>
  z.object({
    name,
    units: z.number(),
    /** What the part multiplies by; null of the level, and where nothing is multiplied. */
    factor: z.number().nullable(),
  });

/** Asks for one cell or total: ids that are left out are summed over. */
export const WhyQuery = z.object({ itemId: IdText.optional(), locationId: IdText.optional(), week: WeekStart });

/** Earlier promotion of the same item on like terms, as sold. */
export const LastPromotion = z.object({
  firstWeek: WeekStart,
  lastWeek: WeekStart,
  weeks: z.number().int(),
  /** Price cut as a share of the regular price; null where unknown. */
  depth: z.number().nullable(),
  isFeatured: z.boolean(),
  isDisplayed: z.boolean(),
  /** Units a week in it, and in the middle one of the weeks without promotion before it; null with fewer than three of them. */
  unitsAWeek: z.number(),
  ordinaryUnitsAWeek: z.number().nullable(),
});
export type LastPromotion = z.infer<typeof LastPromotion>;

/**
 * Why a planned number is what it is, in units that add up: parts of the base to the base, parts of the uplift to the uplift, base + uplift +
 * rounding to the model, model + overrides + held to the plan. A total's parts are the sums of its series' parts.
 */
export const WhyNumber = z.object({
  scope: OverrideScope,
  weekStart: WeekStart,
  version: z.number().int(),
  /** Series that are summed. */
  series: z.number().int(),
  base: z.object({ units: z.number(), parts: z.array(partOf(BasePartName)) }),
  uplift: z.object({ units: z.number(), factor: z.number().nullable(), parts: z.array(partOf(UpliftPartName)) }),
  /** What rounding to unit steps, with the remainder of the weeks before, adds. */
  rounding: z.number(),
  model: z.number(),
  overrides: z.object({
    units: z.number(),
    /** Effect of each override on this number in the order in which they apply; the earliest of many come as one. */
    steps: z.array(z.object({ overrideIds: z.array(Id), units: z.number() })),
  }),
  /** What a locked week's version keeps beyond model and overrides; 0 in open weeks. */
  held: z.number(),
  plan: z.number(),
  lastYear: z.object({ weekStart: WeekStart, units: z.number().nullable() }),
  /** Of single items in promoted weeks, where sales hold one. */
  lastPromotion: LastPromotion.nullable(),
});
export type WhyNumber = z.infer<typeof WhyNumber>;

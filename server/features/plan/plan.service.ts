import type { CalendarHoliday, CalendarPromotion } from '../../../shared/contracts/calendar.ts';
import type { Finding } from '../../../shared/contracts/lines.ts';
import type {
  CategoryPlan,
  HandOver,
  LinePlan,
  LineState,
  OverrideInForce,
  PlanSeries,
  TotalRange,
  VersionSummary,
  Weekline,
} from '../../../shared/contracts/plan.ts';
import type { Named } from '../../../shared/contracts/primitives.ts';
import { scopeKey } from '../../../shared/domain/override-arithmetic.ts';
import { addWeeks, listWeeks, weeksBetween } from '../../../shared/domain/weeks.ts';
import { hasRight, scopeOf, type Actor } from '../../lib/authorise.ts';
import { inTransaction, type Database, type Tx } from '../../lib/database.ts';
import { ProblemError } from '../../lib/problem.ts';
import { holidaysBetween, loadPromotions } from '../calendar/calendar.service.ts';
import { findActiveJob } from '../jobs/jobs.service.ts';
import { categorySalesByWeek, lastSalesWeek, salesTotalsByWeek } from '../sales/sales.service.ts';
import { loadSettings } from '../settings/settings.service.ts';
import {
  deriveLineState,
  joinLockedWeeks,
  lockedPlanWeeks,
  type LineHead,
  type LockedWeek,
  type RunHead,
} from './line-state.ts';
import { demandLine, listMay } from './plan-access.ts';
import { describeOverrides, replayState, type Window } from './plan-state.ts';
import * as repository from './plan.repository.ts';
import type { StoredOverride, StoredSeries } from './plan.repository.ts';
import { rebuildVersion } from './versions.service.ts';

const weeksOfYear = 52;
export const defaultHistoryWeeks = 52;

/** One line's plan with history, model, ranges, overrides in force, state and what the person may do. */
export function readLinePlan(
  database: Database,
  actor: Actor,
  lineId: number,
  historyWeeks: number = defaultHistoryWeeks,
): Promise<LinePlan> {
  return inTransaction(database, async (tx) => {
    const head = await demandLine(tx, actor, lineId);
    const { line, category, version, run, round } = head;
    const state = deriveLineState(head);
    const lockedWeeks = lockedPlanWeeks(head);
    const lastWeek = await lastSalesWeek(tx, category.id);
    const common = {
      line,
      category,
      state,
      version,
      lockedWeeks,
      locks: joinLockedWeeks(head.locked.filter(({ weekStart }) => lockedWeeks.includes(weekStart))),
      round,
      handOver: shownHandOver(head, state),
      isBehindSales: await isBehind(tx, category.id, run, lastWeek),
      activeJob: await findActiveJob(tx, `category:${category.id}`),
      may: listMay(actor, head),
    };
    if (!run) {
      const seam = lastWeek === null ? null : addWeeks(lastWeek, 1);
      return {
        ...common,
        run: null,
        historyFirstWeek: null,
        planFirstWeek: null,
        planWeeks: 0,
        items: [],
        locations: [],
        series: [],
        totals: [],
        overrides: [],
        promotions: [],
        holidays: [],
        findings: [],
        weekline:
          seam === null
            ? null
            : await drawWeekline(tx, {
                categoryId: category.id,
                lineId,
                seam,
                planned: [],
                lockedWeeks: [],
                promotions: [],
              }),
      };
    }
    const figures = await loadPlanFigures(tx, lineId, run, lockedWeeks);
    const historyFirstWeek = addWeeks(run.firstWeek, -historyWeeks);
    const { series, promotions } = await addHistory(tx, lineId, figures, run, historyWeeks);
    return {
      ...common,
      run: { id: run.id, at: run.at, salesTo: run.salesTo, calendarRevision: run.calendarRevision },
      historyFirstWeek,
      planFirstWeek: run.firstWeek,
      planWeeks: run.weeks,
      items: figures.items.map(({ id, code, name, unitStep }) => ({ id, code, name, unitStep })),
      locations: figures.locations,
      series,
      totals: figures.totals,
      overrides: figures.overrides,
      promotions,
      holidays: await holidaysOf(tx, historyFirstWeek, addWeeks(run.firstWeek, run.weeks)),
      findings: figures.findings,
      weekline: await drawWeekline(tx, {
        categoryId: category.id,
        lineId,
        seam: run.firstWeek,
        planned: sumRows(figures.plans, run.weeks),
        lockedWeeks,
        promotions,
      }),
    };
  });
}

/** A hand-over that a forecast or an unlocking has made void isn't shown. */
function shownHandOver(head: LineHead, state: LineState): HandOver | null {
  if (!head.handOver || (state === 'draft' && head.handOver.state === 'submitted')) return null;
  const { actorId: _actorId, ...handOver } = head.handOver;
  return handOver;
}

async function isBehind(tx: Tx, categoryId: number, run: RunHead | null, lastWeek: string | null): Promise<boolean> {
  if (!run) return false;
  if (lastWeek !== run.salesTo) return true;
  return ((await repository.findCategorySalesRevision(tx, categoryId)) ?? 0) > (run.salesRevision ?? 0);
}

interface PlanFigures {
  items: repository.PlannedItem[];
  locations: Named[];
  /** Without history. */
  series: (Omit<PlanSeries, 'units' | 'gapAt' | 'promotedAt' | 'lastYear'> & { unitStep: number })[];
  plans: number[][];
  totals: TotalRange[];
  overrides: OverrideInForce[];
  findings: Finding[];
  fit: { summary: Record<string, number>; specification: Record<string, unknown> } | null;
}

/** Numbers of a line's plan: of its newest state, or of `plan` (a rebuilt version) with the overrides up to that version. */
async function loadPlanFigures(
  tx: Tx,
  lineId: number,
  run: Pick<RunHead, 'id' | 'firstWeek' | 'weeks'>,
  lockedWeeks: readonly string[],
  rebuilt: { version: number; plans: ReadonlyMap<string, number[]> } | null = null,
): Promise<PlanFigures> {
  const window = { firstWeek: run.firstWeek, weeks: run.weeks };
  const rows = await repository.listRunSeries(tx, lineId, run.id);
  const plans =
    rebuilt?.plans ??
    new Map((await repository.listPlanSeries(tx, [lineId])).map((one) => [scopeKey(one), one.plan] as const));
  const planOf = rows.map((row) => plans.get(scopeKey(row)) ?? row.model);
  const stored = (await repository.listOverrides(tx, [lineId], run.firstWeek)).filter(
    ({ version }) => rebuilt === null || version <= rebuilt.version,
  );
  const [fit] = await repository.listFits(tx, [{ lineId, runId: run.id }]);
  const unitSteps = new Map(rows.map(({ itemId, unitStep }) => [itemId, unitStep]));
  const items = await repository.listItems(tx, [...unitSteps.keys()]);
  return {
    items: items.map((item) => ({ ...item, unitStep: unitSteps.get(item.id) ?? item.unitStep })),
    locations: (await repository.listLocations(tx, [...new Set(rows.map(({ locationId }) => locationId))])).map(
      ({ id, name }) => ({ id, name }),
    ),
    series: rows.map((row, index) => ({ ...roundFigures(row), plan: planOf[index]! })),
    plans: planOf,
    totals: (await repository.listRunTotals(tx, lineId, run.id)).map(({ itemId, locationId, ...range }) => ({
      scope: { itemId, locationId },
      ...roundFigures(range),
    })),
    overrides: judgeOverrides(window, rows, planOf, stored, lockedWeeks, (await loadSettings(tx)).lookThreshold),
    findings: fit?.findings ?? [],
    fit: fit ? { summary: fit.summary, specification: fit.specification } : null,
  };
}

/** Base and ranges to a hundredth of a unit: an estimate has no more digits, and the answer is a third as long. */
function roundFigures<Row extends Partial<Record<(typeof roundedFigures)[number], number[]>>>(row: Row): Row {
  const rounded = roundedFigures.flatMap((name) => {
    const values = row[name];
    return values ? [[name, values.map((units) => Math.round(units * 100) / 100)] as const] : [];
  });
  return { ...row, ...Object.fromEntries(rounded) };
}

const roundedFigures = ['base', 'p2_5', 'p10', 'p50', 'p90', 'p97_5'] as const;

function judgeOverrides(
  window: Window,
  series: readonly Pick<StoredSeries, 'itemId' | 'locationId' | 'unitStep' | 'model'>[],
  plans: readonly number[][],
  overrides: readonly StoredOverride[],
  lockedWeeks: readonly string[],
  lookThreshold: number,
): OverrideInForce[] {
  const { unmet } = replayState({ window, series, overrides, lockedWeeks, lockedPlan: plans });
  return describeOverrides({ window, series, overrides, lockedWeeks, unmet, lookThreshold });
}

async function addHistory(
  tx: Tx,
  lineId: number,
  figures: PlanFigures,
  run: RunHead,
  historyWeeks: number,
): Promise<{ series: PlanSeries[]; promotions: CalendarPromotion[] }> {
  const backWeeks = Math.max(historyWeeks, weeksOfYear);
  const firstWeek = addWeeks(run.firstWeek, -backWeeks);
  const sold = new Map(
    (await salesTotalsByWeek(tx, [lineId], firstWeek, backWeeks)).map((one) => [scopeKey(one), one]),
  );
  const shift = backWeeks - historyWeeks;
  const inHistory = (positions: readonly number[] | undefined): number[] =>
    (positions ?? []).filter((at) => at >= shift).map((at) => at - shift);
  const series = figures.series.map(({ unitStep: _unitStep, ...one }): PlanSeries => {
    const history = sold.get(scopeKey(one));
    const units = history?.units ?? new Array<number | null>(backWeeks).fill(null);
    return {
      ...one,
      units: units.slice(shift),
      gapAt: inHistory(history?.gapAt),
      promotedAt: inHistory(history?.promotedAt),
      lastYear: lastYearOf(units, run.weeks),
    };
  });
  const promotions = await loadPromotions(
    tx,
    figures.items.map(({ id }) => id),
    figures.locations.map(({ id }) => id),
    addWeeks(run.firstWeek, -historyWeeks),
    historyWeeks + run.weeks,
  );
  return { series, promotions };
}

/** Units 52 weeks before each planned week; `units` end with the week before the plan's first. */
function lastYearOf(units: readonly (number | null)[], weeks: number): (number | null)[] {
  const from = units.length - weeksOfYear;
  return Array.from({ length: weeks }, (_, week) => units[from + week] ?? null);
}

async function holidaysOf(tx: Tx, firstWeek: string, endWeek: string): Promise<CalendarHoliday[]> {
  const days = await holidaysBetween(tx, firstWeek, endWeek);
  return days
    .filter(({ weekStart }) => weekStart >= firstWeek && weekStart < endWeek)
    .map(({ name, weekStart, date }) => ({ name, weekStart, date }));
}

function sumRows(rows: readonly (readonly number[])[], weeks: number): number[] {
  const sums = new Array<number>(weeks).fill(0);
  for (const row of rows) for (let week = 0; week < weeks; week++) sums[week]! += row[week] ?? 0;
  return sums;
}

/** The band over the page: everything sold up to the seam, what is planned after it. null without any sale. */
async function drawWeekline(
  tx: Tx,
  view: {
    categoryId: number;
    lineId: number | null;
    seam: string;
    planned: number[];
    lockedWeeks: readonly string[];
    promotions: readonly Pick<CalendarPromotion, 'firstWeek' | 'lastWeek'>[];
  },
): Promise<Weekline | null> {
  const { seam, planned } = view;
  const sold = (await categorySalesByWeek(tx, view.categoryId, view.lineId)).filter(
    ({ weekStart }) => weekStart < seam,
  );
  const firstWeek = sold[0]?.weekStart;
  if (firstWeek === undefined) return null;
  const units = new Array<number | null>(weeksBetween(firstWeek, seam)).fill(null);
  for (const week of sold) units[weeksBetween(firstWeek, week.weekStart)] = week.units;
  const comingPromoted = listWeeks(seam, planned.length).filter((week) =>
    view.promotions.some((promotion) => promotion.firstWeek <= week && week <= promotion.lastWeek),
  );
  return {
    firstWeek,
    sold: units,
    planned,
    promotedWeeks: [
      ...sold.filter(({ isPromoted }) => isPromoted).map(({ weekStart }) => weekStart),
      ...comingPromoted,
    ],
    lockedWeeks: [...view.lockedWeeks],
    holidays: await holidaysOf(tx, firstWeek, addWeeks(seam, planned.length)),
  };
}

/** All lines of a category side by side. */
export function readCategoryPlan(database: Database, actor: Actor, categoryId: number): Promise<CategoryPlan> {
  return inTransaction(database, async (tx) => {
    const category = await repository.findCategory(tx, categoryId, scopeOf(actor, 'see-category'));
    if (!category) throw new ProblemError('not-found', 'There is no such category, or you have no access to it.');
    const heads = await repository.listLineHeads(tx, { lineIds: null, categories: [categoryId] });
    const runs = heads.flatMap(({ run }) => run ?? []);
    const newest = runs.reduce<RunHead | null>((best, run) => (!best || run.id > best.id ? run : best), null);
    const lastWeek = await lastSalesWeek(tx, categoryId);
    const seam = newest?.firstWeek ?? (lastWeek === null ? null : addWeeks(lastWeek, 1));
    const lines =
      seam === null ? heads.map(describeUnplanned) : await describeLines(tx, heads, seam, newest?.weeks ?? 0);
    const planned = sumRows(
      lines.map(({ plan }) => plan),
      newest?.weeks ?? 0,
    );
    return {
      category,
      round: await repository.findNewestRound(tx, categoryId),
      historyFirstWeek: seam === null ? null : addWeeks(seam, -defaultHistoryWeeks),
      planFirstWeek: newest?.firstWeek ?? null,
      planWeeks: newest?.weeks ?? 0,
      lines,
      weekline:
        seam === null
          ? null
          : await drawWeekline(tx, {
              categoryId,
              lineId: null,
              seam,
              planned,
              lockedWeeks: weeksLockedInAll(lines.filter(({ version }) => version !== null)),
              promotions: await comingPromotions(tx, heads, newest),
            }),
      lastSalesWeek: lastWeek,
      isBehindSales: await isBehind(tx, categoryId, newest, lastWeek),
      activeJob: await findActiveJob(tx, `category:${categoryId}`),
      may: {
        forecast: hasRight(actor, 'generate-forecast', categoryId),
        changeRound: hasRight(actor, 'lock-line', categoryId),
      },
    };
  });
}

type CategoryLine = CategoryPlan['lines'][number];

function describeUnplanned(head: LineHead): CategoryLine {
  const state = deriveLineState(head);
  return {
    id: head.line.id,
    name: head.line.name,
    state,
    version: head.version,
    sold: [],
    model: [],
    plan: [],
    lastYear: [],
    lockedWeeks: lockedPlanWeeks(head),
    overrides: 0,
    dueAnotherLook: 0,
    handOver: shownHandOver(head, state),
    findings: [],
  };
}

async function describeLines(tx: Tx, heads: readonly LineHead[], seam: string, weeks: number): Promise<CategoryLine[]> {
  const lineIds = heads.map(({ line }) => line.id);
  const firstWeek = addWeeks(seam, -Math.max(defaultHistoryWeeks, weeksOfYear));
  const sales = await salesTotalsByWeek(tx, lineIds, firstWeek, weeksBetween(firstWeek, seam));
  const planSeries = await repository.listPlanSeries(tx, lineIds);
  const overrides = await repository.listOverrides(tx, lineIds, firstOf(heads));
  const fits = await repository.listFits(
    tx,
    heads.flatMap(({ line, run }) => (run ? [{ lineId: line.id, runId: run.id }] : [])),
  );
  const { lookThreshold } = await loadSettings(tx);
  return heads.map((head) => {
    const { line, run } = head;
    const ofLine = <Row extends { lineId: number }>(rows: readonly Row[]): Row[] =>
      rows.filter(({ lineId }) => lineId === line.id);
    const sold = sumKnown(
      ofLine(sales).map(({ units }) => units),
      weeksBetween(firstWeek, seam),
    );
    const series = ofLine(planSeries);
    const shift = run ? weeksBetween(run.firstWeek, seam) : 0;
    const sumFromSeam = (rows: readonly number[][]): number[] =>
      sumRows(
        rows.map((row) => row.slice(shift)),
        weeks,
      );
    const inForce = run
      ? judgeOverrides(
          { firstWeek: run.firstWeek, weeks: run.weeks },
          series,
          series.map(({ plan }) => plan),
          ofLine(overrides).filter(({ lastWeek }) => lastWeek >= run.firstWeek),
          lockedPlanWeeks(head),
          lookThreshold,
        )
      : [];
    return {
      ...describeUnplanned(head),
      sold,
      model: run ? sumFromSeam(series.map(({ model }) => model)) : [],
      plan: run ? sumFromSeam(series.map(({ plan }) => plan)) : [],
      lastYear: lastYearOf(sold, weeks),
      overrides: inForce.filter(({ operation }) => operation !== 'clear').length,
      dueAnotherLook: inForce.filter((one) => one.isDueAnotherLook || one.needsDecision !== null).length,
      findings: fits.find(({ lineId }) => lineId === line.id)?.findings ?? [],
    };
  });
}

function firstOf(heads: readonly LineHead[]): string | null {
  return heads.flatMap(({ run }) => run?.firstWeek ?? []).sort()[0] ?? null;
}

function sumKnown(rows: readonly (readonly (number | null)[])[], weeks: number): (number | null)[] {
  const sums = new Array<number | null>(weeks).fill(null);
  for (const row of rows) {
    row.forEach((units, week) => {
      if (units !== null) sums[week] = (sums[week] ?? 0) + units;
    });
  }
  return sums;
}

function weeksLockedInAll(lines: readonly CategoryLine[]): string[] {
  const [first, ...others] = lines;
  return (first?.lockedWeeks ?? []).filter((week) => others.every(({ lockedWeeks }) => lockedWeeks.includes(week)));
}

async function comingPromotions(tx: Tx, heads: readonly LineHead[], run: RunHead | null): Promise<CalendarPromotion[]> {
  if (!run) return [];
  const series = await repository.listPlanSeries(
    tx,
    heads.map(({ line }) => line.id),
  );
  const ids = (of: (one: StoredSeries) => number): number[] => [...new Set(series.map(of))];
  return loadPromotions(
    tx,
    ids(({ itemId }) => itemId),
    ids(({ locationId }) => locationId),
    run.firstWeek,
    run.weeks,
  );
}

/** A version of a line with everything that a pack prints of it. */
export interface PackLine {
  line: Named;
  category: Named;
  version: VersionSummary;
  run: RunHead;
  /** Weeks that are locked at this version. */
  locked: LockedWeek[];
  planFirstWeek: string;
  planWeeks: number;
  items: repository.PlannedItem[];
  locations: Named[];
  /** Without history; plan = the version's. */
  series: PlanFigures['series'];
  /** Units 52 weeks before each planned week, by series. */
  lastYear: (number | null)[][];
  totals: TotalRange[];
  overrides: OverrideInForce[];
  promotions: CalendarPromotion[];
  holidays: CalendarHoliday[];
  findings: Finding[];
  fit: PlanFigures['fit'];
}

/** Content of a pack for one line at one of its versions, rebuilt from its chain. Throws `not-found` without such a version. */
export async function packContentSource(tx: Tx, lineId: number, versionNumber: number): Promise<PackLine> {
  const [head] = await repository.listLineHeads(tx, { lineIds: [lineId], categories: null });
  const version = (await repository.listVersions(tx, lineId)).find(({ number }) => number === versionNumber);
  if (!head || !version)
    throw new ProblemError('not-found', 'The line or its version isn’t there any more. Reload the page.');
  const run = await repository.findRun(tx, version.runId);
  const rebuilt = await rebuildVersion(tx, lineId, versionNumber);
  const locked = head.locked.filter((week) => week.version === versionNumber);
  const figures = await loadPlanFigures(
    tx,
    lineId,
    run,
    locked.map(({ weekStart }) => weekStart),
    { version: versionNumber, plans: new Map(rebuilt.series.map((one) => [scopeKey(one), one.plan])) },
  );
  const { series, promotions } = await addHistory(tx, lineId, figures, run, 0);
  return {
    line: head.line,
    category: head.category,
    version,
    run,
    locked,
    planFirstWeek: run.firstWeek,
    planWeeks: run.weeks,
    items: figures.items,
    locations: figures.locations,
    series: figures.series,
    lastYear: series.map(({ lastYear }) => lastYear),
    totals: figures.totals,
    overrides: figures.overrides,
    promotions,
    holidays: await holidaysOf(tx, run.firstWeek, addWeeks(run.firstWeek, run.weeks)),
    findings: figures.findings,
    fit: figures.fit,
  };
}

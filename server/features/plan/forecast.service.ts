import type { Job } from '../../../shared/contracts/jobs.ts';
import { scopeKey } from '../../../shared/domain/override-arithmetic.ts';
import { addDays, addWeeks, listWeeks, weeksBetween } from '../../../shared/domain/weeks.ts';
import type { Finding, LineForecast, LineInput } from '../../forecasting/types.ts';
import { roundToSteps } from '../../forecasting/round-to-steps.ts';
import { writeAudit } from '../../lib/audit.ts';
import { demandRight, scopeOf, type Actor } from '../../lib/authorise.ts';
import { inTransaction, type Database, type Tx } from '../../lib/database.ts';
import { ProblemError } from '../../lib/problem.ts';
import { currentCalendarRevision, holidaysBetween, loadPlannedWeeks } from '../calendar/calendar.service.ts';
import { enqueueJob } from '../jobs/jobs.service.ts';
import {
  currentSalesRevision,
  lastSalesWeek,
  loadLineHistory,
  type LineHistorySeries,
} from '../sales/sales.service.ts';
import { expectPrices } from './expected-price.ts';
import { deriveLineState, type LineHead } from './line-state.ts';
import { comparePlans, replayState, type Window } from './plan-state.ts';
import {
  insertForecastVersions,
  insertHandOvers,
  insertLineRun,
  insertRun,
  type NewFit,
  type NewRunSeries,
  type NewRunTotal,
  type NewVersion,
  type PlanRow,
} from './plan-writing.repository.ts';
import * as repository from './plan.repository.ts';

/** Queues the forecast of every line of a category. Throws `no-sales` without accepted sales, `wrong-state` while one is running. */
export function startForecast(
  database: Database,
  actor: Actor,
  categoryId: number,
  horizonWeeks: number,
): Promise<Job> {
  demandRight(actor, 'generate-forecast', categoryId);
  return inTransaction(database, async (tx) => {
    const category = await repository.findCategory(tx, categoryId, scopeOf(actor, 'see-category'));
    if (!category) throw new ProblemError('not-found', 'There is no such category.');
    if ((await lastSalesWeek(tx, categoryId)) === null) throw noSales(category.name);
    const job = await enqueueJob(tx, actor, {
      kind: 'forecast.category',
      subject: `category:${categoryId}`,
      categoryId,
      payload: { categoryId, horizonWeeks },
    });
    await writeAudit(tx, {
      actor,
      action: 'start-forecast',
      subject: `category:${categoryId}`,
      categoryId,
      new: { jobId: job.id, horizonWeeks },
    });
    return job;
  });
}

function noSales(category: string): ProblemError {
  return new ProblemError('no-sales', `${category} has no accepted sales yet. Import sales of its items first.`);
}

export interface GatheredLine {
  lineId: number;
  name: string;
  history: LineHistorySeries[];
  input: LineInput;
  /** Expected price paid, by series in the order of `history`. */
  prices: (number | null)[][];
}

export interface Gathered {
  categoryId: number;
  salesRevision: number | null;
  calendarRevision: number | null;
  salesTo: string;
  window: Window;
  /** Lines that have sales. */
  lines: GatheredLine[];
}

/**
 * Everything a category's forecast reads. The plan's weeks follow the last accepted sales week; there are `horizonWeeks` of them, or as many more as
 * locked weeks reach. To be called in a transaction that sees one state (repeatable read).
 */
export async function gatherForecast(tx: Tx, categoryId: number, horizonWeeks: number): Promise<Gathered> {
  const heads = await repository.listLineHeads(tx, { lineIds: null, categories: [categoryId] });
  const salesTo = await lastSalesWeek(tx, categoryId);
  if (salesTo === null) throw noSales(heads[0]?.category.name ?? 'The category');
  const firstWeek = addWeeks(salesTo, 1);
  const weeks = Math.max(horizonWeeks, ...heads.map((head) => lockedReach(head, firstWeek)));
  const weekStarts = listWeeks(firstWeek, weeks);

  const lines: GatheredLine[] = [];
  for (const { line } of heads) {
    const history = await loadLineHistory(tx, line.id);
    if (history.length === 0) continue;
    const itemIds = [...new Set(history.map(({ itemId }) => itemId))];
    const locationIds = [...new Set(history.map(({ locationId }) => locationId))];
    const planned = new Map(
      (await loadPlannedWeeks(tx, itemIds, locationIds, firstWeek, weeks)).map((one) => [scopeKey(one), one.planned]),
    );
    const firstSold = history.flatMap(({ sold }) => sold[0]?.weekStart ?? []).sort()[0] ?? salesTo;
    const holidays = await holidaysBetween(tx, addDays(firstSold, -14), addDays(addWeeks(firstWeek, weeks), 14));
    lines.push({
      lineId: line.id,
      name: line.name,
      history,
      prices: history.map((series) => expectPrices(series.sold, planned.get(scopeKey(series)) ?? [], weekStarts)),
      input: {
        line: line.name,
        origin: salesTo,
        horizon: weeks,
        seed: line.id,
        holidays: holidays.map(({ name, weekStart, dayInWeek }) => ({ name, weekStart, dayInWeek })),
        series: history.map((series) => ({
          item: series.itemCode,
          location: series.locationCode,
          unitStep: series.unitStep,
          sold: series.sold,
          planned: planned.get(scopeKey(series)) ?? [],
          listedFrom: series.listedFrom,
          listedTo: series.listedTo,
        })),
      },
    });
  }
  return {
    categoryId,
    salesRevision: await currentSalesRevision(tx),
    calendarRevision: await currentCalendarRevision(tx),
    salesTo,
    window: { firstWeek, weeks },
    lines,
  };
}

/** Number of weeks from the plan's first to the last locked one. */
function lockedReach({ locked }: Pick<LineHead, 'locked'>, firstWeek: string): number {
  const last = locked.at(-1)?.weekStart;
  return last === undefined ? 0 : weeksBetween(firstWeek, last) + 1;
}

/**
 * Saves a category's forecast in the caller's transaction: the run, each line's fit, series and totals, and a version of each line with its overrides
 * replayed; locked weeks keep their numbers. What may have changed since it was gathered (locks, overrides, newest versions) is read anew under the
 * lines' locks. Submitted lines lapse to draft; a round is opened where the newest doesn't cover weeks still to come. Returns the run's id.
 */
export async function saveForecast(
  tx: Tx,
  actor: Actor,
  gathered: Gathered,
  forecasts: readonly LineForecast[],
  jobId: number | null,
): Promise<number> {
  const { categoryId, window } = gathered;
  await repository.lockLinesOfCategory(tx, categoryId);
  const heads = new Map(
    (await repository.listLineHeads(tx, { lineIds: null, categories: [categoryId] })).map((head) => [
      head.line.id,
      head,
    ]),
  );
  for (const head of heads.values()) {
    if (lockedReach(head, window.firstWeek) <= window.weeks) continue;
    throw new ProblemError(
      'wrong-state',
      `Further weeks of ${head.line.name} were locked meanwhile. Generate the forecast again.`,
    );
  }
  const { salesRevision, calendarRevision, salesTo } = gathered;
  const runId = await insertRun(tx, {
    categoryId,
    jobId,
    salesRevision,
    calendarRevision,
    salesTo,
    firstWeek: window.firstWeek,
    weeks: window.weeks,
    actorId: actor.id,
  });
  const lineIds = gathered.lines.map(({ lineId }) => lineId);
  const planned = groupByLine(await repository.listPlanSeries(tx, lineIds));
  const overrides = groupByLine(await repository.listOverrides(tx, lineIds, window.firstWeek));

  const versions: NewVersion[] = [];
  const plans: (PlanRow & { lineId: number })[] = [];
  for (const [index, line] of gathered.lines.entries()) {
    const { lineId } = line;
    const head = heads.get(lineId)!;
    const lockedWeeks = head.locked.map(({ weekStart }) => weekStart).filter((week) => week >= window.firstWeek);
    const previous = previousPlan(head, planned.get(lineId) ?? [], window);
    const series = [
      ...describeSeries(line, forecasts[index]!),
      ...keepLockedSeries(line, previous, lockedWeeks, window),
    ].sort((a, b) => a.itemId - b.itemId || a.locationId - b.locationId);
    await insertLineRun(
      tx,
      { runId, lineId, firstWeek: window.firstWeek, salesRevision, calendarRevision },
      { fit: describeFit(forecasts[index]!), series, totals: describeTotals(line, forecasts[index]!) },
    );
    const before = series.map((one) => previous.get(scopeKey(one))?.plan ?? new Array<number>(window.weeks).fill(0));
    const replay = replayState({
      window,
      series,
      overrides: overrides.get(lineId) ?? [],
      lockedWeeks,
      lockedPlan: before,
    });
    const { changedCells, changedUnits } = comparePlans(before, replay.plan);
    versions.push({
      lineId,
      number: (head.version?.number ?? 0) + 1,
      parent: head.version?.number ?? null,
      runId,
      kind: 'forecast',
      authorId: actor.id,
      reason: null,
      note: null,
      heldWeeks: lockedWeeks,
      changedCells,
      changedUnits,
    });
    series.forEach(({ itemId, locationId }, at) => plans.push({ lineId, itemId, locationId, plan: replay.plan[at]! }));
  }
  await insertForecastVersions(tx, versions, window.firstWeek, plans);

  const submitted = [...heads.values()].filter((head) => deriveLineState(head) === 'submitted');
  const round = await openRound(tx, actor, categoryId, window);
  await insertHandOvers(
    tx,
    versions.flatMap(({ lineId, number }) =>
      submitted.some(({ line }) => line.id === lineId)
        ? [{ lineId, roundId: round.id, state: 'lapsed' as const, version: number, actorId: actor.id, comment: null }]
        : [],
    ),
  );
  await writeAudit(tx, {
    actor,
    action: 'generate-forecast',
    subject: `category:${categoryId}`,
    categoryId,
    new: {
      runId,
      salesTo,
      firstWeek: window.firstWeek,
      weeks: window.weeks,
      lines: versions.map(({ lineId, number }) => ({ lineId, version: number })),
    },
  });
  return runId;
}

/** The newest round while its first week is still to come; else a new one over the run's weeks, due in seven days. */
async function openRound(tx: Tx, actor: Actor, categoryId: number, window: Window): Promise<{ id: number }> {
  const newest = await repository.findNewestRound(tx, categoryId);
  if (newest && newest.firstWeek >= window.firstWeek) return newest;
  return repository.insertRound(tx, {
    categoryId,
    opens: null,
    due: null,
    firstWeek: window.firstWeek,
    lastWeek: addWeeks(window.firstWeek, window.weeks - 1),
    actorId: actor.id,
  });
}

/** The newest plan moved to the new run's weeks; weeks that it didn't hold are 0. */
function previousPlan(
  head: LineHead,
  series: readonly repository.StoredSeries[],
  window: Window,
): Map<string, repository.StoredSeries> {
  const shift = head.run ? weeksBetween(head.run.firstWeek, window.firstWeek) : 0;
  return new Map(
    series.map((one) => [
      scopeKey(one),
      { ...one, plan: Array.from({ length: window.weeks }, (_, week) => one.plan[week + shift] ?? 0) },
    ]),
  );
}

function describeSeries(line: GatheredLine, forecast: LineForecast): NewRunSeries[] {
  const byCodes = new Map(forecast.series.map((one) => [`${one.item}\n${one.location}`, one]));
  return line.history.map((series, index) => {
    const one = byCodes.get(`${series.itemCode}\n${series.locationCode}`);
    if (!one) throw new Error(`the forecast of ${line.name} lacks ${series.itemCode} at ${series.locationCode}`);
    return {
      itemId: series.itemId,
      locationId: series.locationId,
      unitStep: series.unitStep,
      method: one.method,
      model: [...roundToSteps(one.mean, series.unitStep).rounded],
      mean: [...one.mean],
      base: [...one.base],
      p2_5: [...one.p2_5],
      p10: [...one.p10],
      p50: [...one.p50],
      p90: [...one.p90],
      p97_5: [...one.p97_5],
      price: line.prices[index]!,
      marks: Object.fromEntries(one.marks.flatMap((marks, week) => (marks.length > 0 ? [[String(week), marks]] : []))),
      parts: Object.fromEntries(Object.entries(one.parts).map(([name, values]) => [name, [...values]])),
    };
  });
}

/** Series that the run doesn't know any more but whose locked weeks hold a number: kept with a model of zero. */
function keepLockedSeries(
  line: GatheredLine,
  previous: ReadonlyMap<string, repository.StoredSeries>,
  lockedWeeks: readonly string[],
  window: Window,
): NewRunSeries[] {
  const known = new Set(line.history.map(scopeKey));
  const locked = lockedWeeks.map((week) => weeksBetween(window.firstWeek, week));
  const nothing = new Array<number>(window.weeks).fill(0);
  return [...previous.values()]
    .filter((one) => !known.has(scopeKey(one)) && locked.some((week) => one.plan[week] !== 0))
    .map(({ itemId, locationId, unitStep }) => ({
      itemId,
      locationId,
      unitStep,
      method: 'not-listed',
      model: nothing,
      mean: nothing,
      base: nothing,
      p2_5: nothing,
      p10: nothing,
      p50: nothing,
      p90: nothing,
      p97_5: nothing,
      price: nothing.map(() => null),
      marks: {},
      parts: {},
    }));
}

function describeTotals(line: GatheredLine, { totals }: LineForecast): NewRunTotal[] {
  const itemIds = new Map(line.history.map(({ itemCode, itemId }) => [itemCode, itemId]));
  const locationIds = new Map(line.history.map(({ locationCode, locationId }) => [locationCode, locationId]));
  return totals.map(({ scope, of, mean, p2_5, p10, p50, p90, p97_5 }) => ({
    scope,
    itemId: scope === 'item' ? (itemIds.get(of ?? '') ?? null) : null,
    locationId: scope === 'location' ? (locationIds.get(of ?? '') ?? null) : null,
    mean: [...mean],
    p2_5: [...p2_5],
    p10: [...p10],
    p50: [...p50],
    p90: [...p90],
    p97_5: [...p97_5],
  }));
}

/** A line that was too thin to be fitted keeps an empty fit with the findings that say so. */
function describeFit({ fit, findings }: LineForecast): NewFit {
  if (!fit) {
    return {
      specification: { method: 'simple-average' },
      coefficients: [],
      factorR: [],
      scores: [],
      summary: { rows: 0, rank: 0, sigma: 0, rSquared: 0, aic: 0, seconds: 0 },
      findings,
      diagnosis: null,
    };
  }
  const { specification, coefficients, factorR, scores, rows, rank, sigma, rSquared, aic, seconds } = fit;
  return {
    specification,
    coefficients,
    factorR,
    scores,
    summary: { rows, rank, sigma, rSquared, aic, seconds },
    findings: withoutRepeats([...fit.findings, ...findings]),
    diagnosis: fit.diagnosis ?? null,
  };
}

function withoutRepeats(findings: readonly Finding[]): Finding[] {
  return [...new Map(findings.map((finding) => [JSON.stringify(finding), finding])).values()];
}

function groupByLine<Row extends { lineId: number }>(rows: readonly Row[]): Map<number, Row[]> {
  const groups = new Map<number, Row[]>();
  for (const row of rows) {
    const group = groups.get(row.lineId);
    if (group) group.push(row);
    else groups.set(row.lineId, [row]);
  }
  return groups;
}

import type { WaitingEntry } from '../../../shared/contracts/waiting.ts';
import { hasRight, scopeOf, type Actor } from '../../lib/authorise.ts';
import type { Tx } from '../../lib/database.ts';
import { lastSalesWeek } from '../sales/sales.service.ts';
import { loadSettings } from '../settings/settings.service.ts';
import { deriveLineState, lockedPlanWeeks, plannedWeeks, type LineHead } from './line-state.ts';
import { describeOverrides, replayState } from './plan-state.ts';
import * as repository from './plan.repository.ts';
import type { StoredOverride, StoredSeries } from './plan.repository.ts';

/**
 * What of the plan waits for the person: lines to submit, returned or to review, overrides that are due another look or need a decision, categories
 * whose forecast is missing or behind their sales. A line's stake is the net value planned for its open weeks, where prices are known.
 */
export async function waitingPlanEntries(tx: Tx, actor: Actor): Promise<WaitingEntry[]> {
  const heads = await repository.listLineHeads(tx, { lineIds: null, categories: scopeOf(actor, 'see-category') });
  const mine = heads.filter(
    ({ category }) => hasRight(actor, 'override-draft', category.id) || hasRight(actor, 'lock-line', category.id),
  );
  if (mine.length === 0) return [];
  const lineIds = mine.map(({ line }) => line.id);
  const series = group(await repository.listPlanSeries(tx, lineIds));
  const overrides = group(await repository.listOverrides(tx, lineIds, firstPlannedWeek(mine)));
  const stakes = await repository.sumPlannedValue(tx, lineIds);
  const { lookThreshold } = await loadSettings(tx);
  const entries = mine.flatMap((head) =>
    listLineEntries(actor, head, {
      series: series.get(head.line.id) ?? [],
      overrides: overrides.get(head.line.id) ?? [],
      stake: stakes.get(head.line.id) ?? null,
      lookThreshold,
    }),
  );
  return [...(await listForecastEntries(tx, actor, mine)), ...entries];
}

function listLineEntries(
  actor: Actor,
  head: LineHead,
  plan: { series: StoredSeries[]; overrides: StoredOverride[]; stake: number | null; lookThreshold: number },
): WaitingEntry[] {
  const { run, line, category, handOver } = head;
  if (!run) return [];
  const state = deriveLineState(head);
  const isDraft = state === 'draft' && lockedPlanWeeks(head).length < plannedWeeks(head).length;
  const isReturned = isDraft && handOver?.state === 'returned';
  const entry = (
    kind: WaitingEntry['kind'],
    count: number,
    at: string | null,
    detail: string | null,
  ): WaitingEntry => ({
    kind,
    categoryId: category.id,
    categoryName: category.name,
    subject: line.name,
    detail,
    count,
    stake: plan.stake,
    at,
    link: `/plan/${line.id}?category=${category.id}`,
  });
  const entries: WaitingEntry[] = [];
  if (state === 'submitted' && hasRight(actor, 'lock-line', category.id)) {
    entries.push(entry('line-to-review', 1, handOver?.at ?? null, handOver?.comment ?? null));
  }
  if (isDraft && hasRight(actor, 'submit-line', category.id)) {
    if (isReturned) entries.push(entry('line-returned', 1, handOver.at, handOver.comment));
    else entries.push(entry('line-to-submit', 1, head.version?.at ?? null, head.round?.due ?? null));
  }
  if (isDraft && hasRight(actor, 'override-draft', category.id)) {
    const window = { firstWeek: run.firstWeek, weeks: run.weeks };
    const lockedWeeks = lockedPlanWeeks(head);
    const { series, overrides, lookThreshold } = plan;
    const lockedPlan = series.map((one) => one.plan);
    const { unmet } = replayState({ window, series, overrides, lockedWeeks, lockedPlan });
    const inForce = describeOverrides({ window, series, overrides, lockedWeeks, unmet, lookThreshold });
    const undecided = inForce.filter(({ needsDecision }) => needsDecision !== null).length;
    const due = inForce.filter((one) => one.isDueAnotherLook && one.needsDecision === null).length;
    if (undecided > 0) entries.push(entry('override-needs-decision', undecided, head.version?.at ?? null, null));
    if (due > 0) entries.push(entry('override-due-another-look', due, head.version?.at ?? null, null));
  }
  return entries;
}

async function listForecastEntries(tx: Tx, actor: Actor, heads: readonly LineHead[]): Promise<WaitingEntry[]> {
  const entries: WaitingEntry[] = [];
  const categories = new Map(heads.map(({ category }) => [category.id, category]));
  for (const category of categories.values()) {
    if (!hasRight(actor, 'generate-forecast', category.id)) continue;
    const salesTo = await lastSalesWeek(tx, category.id);
    if (salesTo === null) continue;
    const runs = heads.flatMap((head) => (head.category.id === category.id ? (head.run ?? []) : []));
    const newest = runs.sort((a, b) => b.id - a.id)[0];
    const revision = (await repository.findCategorySalesRevision(tx, category.id)) ?? 0;
    if (newest && newest.salesTo === salesTo && revision <= (newest.salesRevision ?? 0)) continue;
    entries.push({
      kind: newest ? 'forecast-behind-sales' : 'no-forecast-yet',
      categoryId: category.id,
      categoryName: category.name,
      subject: category.name,
      detail: null,
      count: 1,
      stake: null,
      at: newest?.at ?? null,
      link: `/plan?category=${category.id}`,
    });
  }
  return entries;
}

function firstPlannedWeek(heads: readonly LineHead[]): string | null {
  return heads.flatMap(({ run }) => run?.firstWeek ?? []).sort()[0] ?? null;
}

function group<Row extends { lineId: number }>(rows: readonly Row[]): Map<number, Row[]> {
  const groups = new Map<number, Row[]>();
  for (const row of rows) {
    const ofLine = groups.get(row.lineId);
    if (ofLine) ofLine.push(row);
    else groups.set(row.lineId, [row]);
  }
  return groups;
}

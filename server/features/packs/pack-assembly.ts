import type { OverrideInForce } from '../../../shared/contracts/plan.ts';
import { replayOverrides } from '../../../shared/domain/override-arithmetic.ts';
import { addWeeks, listWeeks, weeksBetween } from '../../../shared/domain/weeks.ts';
import type {
  PackAssumptions,
  PackContent,
  PackLine,
  PackOverride,
  PackRow,
} from '../../workbooks/pack/pack-content.ts';
import type { PackLine as PlannedLine } from '../plan/plan.service.ts';
import { describeFindings } from './finding-sentences.ts';

/** What a pack is assembled from, besides the lines' plans. */
export interface PackFrame {
  category: string;
  number: number;
  firstWeek: string;
  lastWeek: string;
  currency: string;
  isVatIncluded: boolean | null;
  builtAt: Date;
  builtBy: string;
  timeZone: string;
}

const nothing = 0;

/** The content of a pack from the versions' plans; pure. The control totals are summed over series, the sheets hold items. */
export function assemblePack(frame: PackFrame, lines: readonly PlannedLine[]): PackContent {
  const weekStarts = listWeeks(frame.firstWeek, weeksBetween(frame.firstWeek, frame.lastWeek) + 1);
  return {
    category: frame.category,
    number: frame.number,
    weekStarts,
    currency: frame.currency,
    isVatIncluded: frame.isVatIncluded,
    builtAt: frame.builtAt,
    builtBy: frame.builtBy,
    timeZone: frame.timeZone,
    salesThroughWeek: lines.map(({ run }) => run.salesTo).sort()[0] ?? null,
    controlTotals: sumControl(lines, weekStarts),
    lines: lines.map((line) => describeLine(line, weekStarts)),
    overrides: lines.flatMap((line) => describeOverrides(line, weekStarts)),
    assumptions: describeAssumptions(lines, weekStarts),
    remarks: lines.flatMap((line) => describeRemarks(line, weekStarts)),
  };
}

function alongWeeks<T>(line: PlannedLine, weekStarts: readonly string[], values: readonly T[], missing: T): T[] {
  return weekStarts.map((weekStart) => values[weeksBetween(line.planFirstWeek, weekStart)] ?? missing);
}

function sumControl(lines: readonly PlannedLine[], weekStarts: readonly string[]): PackContent['controlTotals'] {
  let units = 0;
  let netValue = 0;
  let hasPrice = false;
  for (const line of lines) {
    for (const series of line.series) {
      weekStarts.forEach((weekStart) => {
        const at = weeksBetween(line.planFirstWeek, weekStart);
        const planned = series.plan[at] ?? nothing;
        units += planned;
        const price = series.price[at] ?? null;
        if (price !== null) {
          hasPrice = true;
          netValue += planned * price;
        }
      });
    }
  }
  return { units, netValue: hasPrice ? netValue : null };
}

function describeLine(line: PlannedLine, weekStarts: readonly string[]): PackLine {
  const lockedWeeks = new Set(line.locked.map(({ weekStart }) => weekStart));
  const isWeekLocked = weekStarts.map((weekStart) => lockedWeeks.has(weekStart));
  const newestLock = [...line.locked].sort((a, b) => (a.at < b.at ? 1 : -1))[0];
  const range = line.totals.find(({ scope }) => scope.itemId === null && scope.locationId === null);
  const lastYear = weekStarts.map((weekStart) => {
    const at = weeksBetween(line.planFirstWeek, weekStart);
    const known = line.lastYear.flatMap((units) => units[at] ?? []);
    return known.length === 0 ? null : known.reduce((sum, units) => sum + units, 0);
  });
  const isInsideRun = weekStarts.every((weekStart) => {
    const at = weeksBetween(line.planFirstWeek, weekStart);
    return at >= 0 && at < line.planWeeks;
  });
  return {
    name: line.line.name,
    version: line.version.number,
    state: isWeekLocked.every(Boolean) ? 'locked' : 'draft',
    lockedBy: newestLock?.actor ?? null,
    lockedAt: newestLock ? new Date(newestLock.at) : null,
    isWeekLocked,
    rows: line.items.map((item) => describeItem(line, item, weekStarts)),
    modelRange:
      range && isInsideRun
        ? {
            mean: alongWeeks(line, weekStarts, sumModel(line), nothing),
            p2_5: alongWeeks(line, weekStarts, range.p2_5, nothing),
            p10: alongWeeks(line, weekStarts, range.p10, nothing),
            p90: alongWeeks(line, weekStarts, range.p90, nothing),
            p97_5: alongWeeks(line, weekStarts, range.p97_5, nothing),
          }
        : null,
    lastYearUnits: lastYear,
  };
}

function sumModel(line: PlannedLine): number[] {
  const sums = new Array<number>(line.planWeeks).fill(0);
  for (const { model } of line.series) model.forEach((units, week) => (sums[week] = (sums[week] ?? 0) + units));
  return sums;
}

/** One row per item over its locations; the price is the plan's average, so that units × price is the net value. */
function describeItem(line: PlannedLine, item: PlannedLine['items'][number], weekStarts: readonly string[]): PackRow {
  const series = line.series.filter(({ itemId }) => itemId === item.id);
  const at = weekStarts.map((weekStart) => weeksBetween(line.planFirstWeek, weekStart));
  const plan = at.map((week) => series.reduce((sum, one) => sum + (one.plan[week] ?? nothing), 0));
  return {
    item: item.code,
    itemName: item.name,
    location: null,
    plan,
    price: at.map((week, index) => averagePrice(series, week, plan[index] ?? nothing)),
    isOverridden: weekStarts.map((weekStart) =>
      line.overrides.some(
        (override) =>
          override.operation !== 'clear' &&
          (override.scope.itemId === null || override.scope.itemId === item.id) &&
          override.firstWeek <= weekStart &&
          override.lastWeek >= weekStart,
      ),
    ),
    isPromoted: weekStarts.map((weekStart) =>
      line.promotions.some(
        (promotion) =>
          promotion.itemIds.includes(item.id) && promotion.firstWeek <= weekStart && promotion.lastWeek >= weekStart,
      ),
    ),
  };
}

function averagePrice(series: PlannedLine['series'], week: number, units: number): number | null {
  let value = 0;
  let known = 0;
  let sum = 0;
  for (const one of series) {
    const price = one.price[week] ?? null;
    if (price === null) continue;
    known += 1;
    sum += price;
    value += price * (one.plan[week] ?? nothing);
  }
  if (known === 0) return null;
  return units > 0 ? value / units : sum / known;
}

/** Overrides in force that touch the pack's weeks, each with the units by which it moved the plan when it was applied, in the order of application. */
function describeOverrides(line: PlannedLine, weekStarts: readonly string[]): PackOverride[] {
  const first = weekStarts[0] ?? '';
  const last = weekStarts.at(-1) ?? '';
  const replay = (overrides: readonly OverrideInForce[]): number =>
    replayOverrides({
      series: line.series,
      planFirstWeek: line.planFirstWeek,
      planWeeks: line.planWeeks,
      lockedWeeks: [],
      lockedPlan: null,
      overrides,
    }).plan.reduce((sum, plan) => sum + alongWeeks(line, weekStarts, plan, nothing).reduce((a, b) => a + b, 0), 0);
  let before = replay([]);
  const described: PackOverride[] = [];
  line.overrides.forEach((override, index) => {
    const after = replay(line.overrides.slice(0, index + 1));
    if (
      override.operation !== 'clear' &&
      override.value !== null &&
      override.firstWeek <= last &&
      override.lastWeek >= first
    ) {
      described.push({
        line: line.line.name,
        author: override.author,
        at: new Date(override.at),
        reason: override.reason ?? '',
        note: override.note,
        scope: nameScope(line, override),
        firstWeek: override.firstWeek,
        lastWeek: override.lastWeek,
        operation: override.operation,
        value: override.value,
        effectUnits: after - before,
      });
    }
    before = after;
  });
  return described;
}

function nameScope(line: PlannedLine, { scope }: OverrideInForce): string {
  const item = line.items.find(({ id }) => id === scope.itemId)?.name;
  const location = line.locations.find(({ id }) => id === scope.locationId)?.name;
  if (item !== undefined && location !== undefined) return `${item} at ${location}`;
  return item ?? (location === undefined ? 'Line total' : `All items at ${location}`);
}

function describeAssumptions(lines: readonly PlannedLine[], weekStarts: readonly string[]): PackAssumptions {
  const first = weekStarts[0] ?? '';
  const last = weekStarts.at(-1) ?? '';
  const holidays = new Map<string, { date: string; name: string }>();
  for (const { holidays: ofLine } of lines) {
    for (const { date, name } of ofLine) {
      if (date >= first && date < addWeeks(last, 1)) holidays.set(`${date} ${name}`, { date, name });
    }
  }
  return {
    prices: lines.flatMap((line) => describePrices(line, weekStarts)),
    promotions: lines.flatMap((line) =>
      line.promotions
        .filter((promotion) => promotion.firstWeek <= last && promotion.lastWeek >= first)
        .map((promotion) => ({
          name: promotion.name,
          line: line.line.name,
          items: nameAll(promotion.itemIds, line.items),
          locations: nameAll(promotion.locationIds, line.locations),
          firstWeek: promotion.firstWeek,
          lastWeek: promotion.lastWeek,
          mechanic: nameMechanic(promotion),
          depthFraction: promotion.depth,
          featureFraction: promotion.feature,
          displayFraction: promotion.display,
        })),
    ),
    holidays: [...holidays.values()].sort((a, b) => (a.date < b.date ? -1 : 1)),
    fits: lines.map((line) => ({
      line: line.line.name,
      fittedAt: line.fit ? new Date(line.run.at) : null,
      weeks: line.planWeeks,
      series: line.series.length,
      adjustedRSquared: line.fit?.summary.rSquared ?? null,
      residualErrorFraction: line.fit?.summary.sigma === undefined ? null : Math.expm1(line.fit.summary.sigma),
      backTestErrorFraction: null,
      remark: line.series.some(({ method }) => method === 'simple-average')
        ? 'Some series have a simple average.'
        : null,
    })),
    findings: lines.flatMap((line) =>
      describeFindings(line.findings).map((detail) => ({ line: line.line.name, detail })),
    ),
  };
}

function nameAll(ids: readonly number[], known: readonly { id: number; name: string }[]): string {
  return ids.length >= known.length
    ? 'all'
    : ids.map((id) => known.find((candidate) => candidate.id === id)?.name ?? String(id)).join(', ');
}

function nameMechanic(promotion: PlannedLine['promotions'][number]): string {
  const names = Object.entries(promotion.mechanics)
    .filter(([, share]) => share > 0)
    .map(([name]) => name.replaceAll('_', ' '));
  if ((promotion.depth ?? 0) > 0) names.unshift('price cut');
  return names.join(', ');
}

/** Runs of weeks in which an item's expected price paid stays the same. */
function describePrices(line: PlannedLine, weekStarts: readonly string[]): PackAssumptions['prices'] {
  return line.items.flatMap((item) => {
    const { price } = describeItem(line, item, weekStarts);
    const runs: PackAssumptions['prices'] = [];
    weekStarts.forEach((weekStart, index) => {
      const paid = price[index] ?? null;
      const rounded = paid === null ? null : Math.round(paid * 100) / 100;
      const current = runs.at(-1);
      if (current && current.price === rounded) current.lastWeek = weekStart;
      else {
        runs.push({
          line: line.line.name,
          item: item.name,
          location: null,
          firstWeek: weekStart,
          lastWeek: weekStart,
          regularPrice: null,
          price: rounded,
        });
      }
    });
    return runs;
  });
}

function describeRemarks(line: PlannedLine, weekStarts: readonly string[]): string[] {
  const lockedWeeks = new Set(line.locked.map(({ weekStart }) => weekStart));
  const open = weekStarts.filter((weekStart) => !lockedWeeks.has(weekStart)).length;
  const remarks: string[] = [];
  if (open > 0)
    remarks.push(
      `${line.line.name}: ${open} of ${weekStarts.length} weeks aren’t locked; their numbers may still change.`,
    );
  const undecided = line.overrides.filter(({ needsDecision }) => needsDecision !== null);
  if (undecided.length > 0)
    remarks.push(`${line.line.name}: ${undecided.length} overrides can’t be met on the present model.`);
  const due = line.overrides.filter(
    ({ isDueAnotherLook, needsDecision }) => isDueAnotherLook && needsDecision === null,
  );
  if (due.length > 0)
    remarks.push(`${line.line.name}: ${due.length} overrides are due another look, since the model has moved.`);
  return remarks;
}

/** Units and net value of each line in the pack, and whether all its weeks are locked: what is kept beside the file. */
export function summarisePack(
  content: PackContent,
  lines: readonly PlannedLine[],
): { id: number; name: string; version: number; units: number; isLocked: boolean }[] {
  return content.lines.map((line, index) => ({
    id: lines[index]?.line.id ?? 0,
    name: line.name,
    version: line.version,
    units: line.rows.reduce((sum, row) => sum + row.plan.reduce((a, b) => a + b, 0), 0),
    isLocked: line.isWeekLocked.every(Boolean),
  }));
}

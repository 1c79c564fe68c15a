import type { CalendarPromotion, CalendarView } from '../../../shared/contracts/calendar.ts';
import { addWeeks, weeksBetween } from '../../../shared/domain/weeks.ts';

/** A promotion as a bar on the weeks shown. `lane` keeps bars of the same weeks apart. */
export interface PromotionBar {
  promotion: CalendarPromotion;
  /** Position in the view's list of promotions: its name in the address. */
  index: number;
  first: number;
  last: number;
  lane: number;
  /** The label doesn't fit inside and stands after the bar. */
  isLabelBeside: boolean;
}

/** Width that a label takes, in weeks of the usual 43 px at 11 px type. */
function weeksOfLabel(label: string): number {
  return (label.length * 6 + 14) / 43;
}

/** Bars of the promotions that hold any of the items, in lanes in which neither bars nor the labels beside them overlap. */
export function layBars(
  view: Pick<CalendarView, 'firstWeek' | 'weeks' | 'promotions'>,
  itemIds: readonly number[],
  labelOf: (promotion: CalendarPromotion) => string = ({ name }) => name,
): PromotionBar[] {
  const wanted = new Set(itemIds);
  const laneEnds: number[] = [];
  return view.promotions
    .map((promotion, index) => ({
      promotion,
      index,
      first: Math.max(0, weeksBetween(view.firstWeek, promotion.firstWeek)),
      last: Math.min(view.weeks - 1, weeksBetween(view.firstWeek, promotion.lastWeek)),
    }))
    .filter(({ promotion, first, last }) => last >= first && promotion.itemIds.some((id) => wanted.has(id)))
    .sort((a, b) => a.first - b.first || b.last - a.last || a.index - b.index)
    .map((bar) => {
      const needed = weeksOfLabel(labelOf(bar.promotion));
      const isLabelBeside = needed > bar.last - bar.first + 1 && bar.last + 1 + needed <= view.weeks;
      const free = laneEnds.findIndex((end) => end <= bar.first);
      const lane = free === -1 ? laneEnds.length : free;
      laneEnds[lane] = bar.last + 1 + (isLabelBeside ? needed : 0);
      return { ...bar, lane, isLabelBeside };
    });
}

export interface PriceStep {
  /** Position among the weeks shown, 0 or later. */
  position: number;
  price: number;
  before: number | null;
  /** Locations don't agree; the middle price is shown. */
  isMixed: boolean;
}

/** Regular price of an item from week to week: its steps only, the middle one where locations differ. */
export function listPriceSteps(
  view: Pick<CalendarView, 'firstWeek' | 'weeks' | 'prices'>,
  itemId: number,
): PriceStep[] {
  const rows = view.prices
    .filter((row) => row.itemId === itemId)
    .sort((a, b) => a.weekStart.localeCompare(b.weekStart));
  const inForce = new Map<number | null, number>();
  const steps: PriceStep[] = [];
  let next = 0;
  for (let position = 0; position < view.weeks; position += 1) {
    const week = addWeeks(view.firstWeek, position);
    for (let row = rows[next]; row && row.weekStart <= week; row = rows[next]) {
      if (row.locationId === null) inForce.clear();
      inForce.set(row.locationId, row.regularPrice);
      next += 1;
    }
    if (inForce.size === 0) continue;
    const prices = [...inForce.values()].sort((a, b) => a - b);
    const price = prices[Math.floor((prices.length - 1) / 2)] ?? 0;
    const before = steps.at(-1);
    if (before && Math.abs(before.price - price) < 0.005) continue;
    steps.push({
      position,
      price,
      before: before?.price ?? null,
      isMixed: (prices.at(-1) ?? 0) - (prices[0] ?? 0) > 0.005,
    });
  }
  return steps;
}

/** Consecutive weeks of one month, for the head. */
export function listMonths(firstWeek: string, weeks: number): { first: number; weeks: number; day: string }[] {
  const months: { first: number; weeks: number; day: string }[] = [];
  for (let position = 0; position < weeks; position += 1) {
    const day = addWeeks(firstWeek, position);
    const last = months.at(-1);
    if (last && last.day.slice(0, 7) === day.slice(0, 7)) last.weeks += 1;
    else months.push({ first: position, weeks: 1, day });
  }
  return months;
}

import { addDays, addWeeks, easterSunday, isoWeekOf, weekLabel } from '../shared/domain/weeks.ts';
import {
  categories,
  firstWeek,
  historyWeeks,
  locations,
  plannedWeeks,
  type DemoCategory,
  type DemoItem,
  type DemoLine,
  type DemoLocation,
} from './company.ts';
import { drawGenerator, type Draw } from './random.ts';

/** One row of the canonical long file. */
export interface SalesRow {
  week: string;
  weekStart: string;
  category: string;
  line: string;
  item: string;
  itemName: string;
  location: string;
  units: number;
  netValue: number;
  price: number;
  regularPrice: number;
  feature: number;
  display: number;
  multibuy: number;
  gap: number;
}

/** One row of the coming weeks' calendar. */
export interface CalendarRow {
  week: string;
  weekStart: string;
  category: string;
  line: string;
  item: string;
  location: string;
  regularPrice: number;
  depth: number;
  feature: number;
  display: number;
  multibuy: number;
  promotion: string;
}

interface PromotionWeek {
  depth: number;
  feature: number;
  display: number;
  multibuy: number;
  name: string;
}

const seed = 20_231_204;
const totalWeeks = historyWeeks + plannedWeeks;
const noPromotion: PromotionWeek = { depth: 0, feature: 0, display: 0, multibuy: 0, name: '' };

const promotionNames: readonly string[] = [
  'Early bird weeks',
  'Market days',
  'Cupboard fillers',
  'Leaflet week',
  'House favourites',
  'Autumn shelf',
  'Spring shelf',
  'Neighbour days',
];

function wholeCents(value: number): number {
  return Math.round(value * 100) / 100;
}

/** Regular prices over all weeks: one or two permanent changes, to a price that ends in 9. */
function drawRegularPrices(item: DemoItem, draw: Draw): number[] {
  const prices: number[] = [];
  const changeWeeks = [30 + draw.integer(40), 95 + draw.integer(45)];
  let price = item.price;
  for (let week = 0; week < totalWeeks; week += 1) {
    if (changeWeeks.includes(week))
      price = Math.max(0.49, Math.floor(price * (1 + draw.uniform(0.02, 0.09)) * 10) / 10 + 0.09);
    prices.push(wholeCents(price));
  }
  return prices;
}

/** Promotions of one item: every 7 to 15 weeks, one or two weeks long, all locations alike. */
function drawPromotions(draw: Draw): PromotionWeek[] {
  const weeks: PromotionWeek[] = Array.from({ length: totalWeeks }, () => noPromotion);
  let week = 3 + draw.integer(10);
  while (week < totalWeeks) {
    const length = draw.chance(0.35) ? 2 : 1;
    const kind = draw.next();
    const promotion: PromotionWeek = {
      depth: kind < 0.82 ? draw.pick([0.1, 0.15, 0.2, 0.2, 0.25, 0.3]) : 0,
      feature: draw.chance(0.55) ? 1 : 0,
      display: draw.chance(0.3) ? 1 : 0,
      multibuy: kind >= 0.82 ? 1 : 0,
      name: draw.pick(promotionNames),
    };
    for (let offset = 0; offset < length && week + offset < totalWeeks; offset += 1) weeks[week + offset] = promotion;
    week += length + 6 + draw.integer(9);
  }
  return weeks;
}

function seasonOf(line: DemoLine, weekStart: string): number {
  const { week } = isoWeekOf(addDays(weekStart, 3));
  return line.effects.seasonHeight * Math.cos((2 * Math.PI * (week - line.effects.seasonPeakWeek)) / 52.18);
}

function feastOf(line: DemoLine, weekStart: string): number {
  const weekEnd = addDays(weekStart, 6);
  const year = Number(weekEnd.slice(0, 4));
  const easter = easterSunday(year);
  let lift = 0;
  if (easter >= weekStart && easter <= weekEnd) lift += line.effects.easter;
  // The week that holds 24 December; a year's end inside a week is covered by its first day's year.
  const christmasEve = `${weekStart.slice(0, 4)}-12-24`;
  if (christmasEve >= weekStart && christmasEve <= weekEnd) lift += line.effects.christmas;
  return lift;
}

/** ln of the lift that a promotion week gives. */
function promotionLift(line: DemoLine, promotion: PromotionWeek): number {
  const { effects } = line;
  return (
    effects.promotionElasticity * Math.log(1 - promotion.depth) +
    effects.feature * promotion.feature +
    effects.display * promotion.display +
    effects.multibuy * promotion.multibuy
  );
}

interface ItemStory {
  item: DemoItem;
  regularPrices: number[];
  promotions: PromotionWeek[];
}

function tellStories(line: DemoLine, draw: Draw): ItemStory[] {
  return line.items.map((item) => ({
    item,
    regularPrices: drawRegularPrices(item, draw),
    promotions: drawPromotions(draw),
  }));
}

/** All sales rows of a category over the whole history, in the order line, item, location, week. Same numbers at every call. */
export function generateSales(category: DemoCategory, at: readonly DemoLocation[] = locations): SalesRow[] {
  const rows: SalesRow[] = [];
  for (const line of category.lines) {
    const draw = drawGenerator(seed, `${category.slug}/${line.name}`);
    const stories = tellStories(line, draw);
    const shocks = Array.from({ length: historyWeeks }, () => 0.05 * draw.normal());
    for (const { item, regularPrices, promotions } of stories) {
      for (const location of at) {
        const level = Math.log(item.units * location.size) + 0.12 * draw.normal();
        let wander = 0;
        for (let week = item.fromWeek ?? 0; week < Math.min(historyWeeks, item.toWeek ?? historyWeeks); week += 1) {
          const weekStart = addWeeks(firstWeek, week);
          wander = 0.8 * wander + 0.03 * draw.normal();
          const promotion = promotions[week] ?? noPromotion;
          const regularPrice = regularPrices[week] ?? item.price;
          const lastTwo = [promotions[week - 1], promotions[week - 2]].map((past) =>
            past ? promotionLift(line, past) : 0,
          );
          const dip = promotion === noPromotion ? -line.effects.dip * Math.max(...lastTwo, 0) : 0;
          const logUnits =
            level +
            wander +
            (shocks[week] ?? 0) +
            line.effects.regularElasticity * Math.log(regularPrice / item.price) +
            promotionLift(line, promotion) +
            dip +
            seasonOf(line, weekStart) +
            feastOf(line, weekStart) +
            (line.effects.trendPerYear * week) / 52.18 +
            0.1 * draw.normal();
          const gap = draw.chance(0.006) ? Math.round(draw.uniform(0.2, 0.9) * 20) / 20 : 0;
          const units = draw.poisson(Math.exp(logUnits) * (1 - gap));
          const price = wholeCents(regularPrice * (1 - promotion.depth));
          // A file now and then lacks a row: unknown, not zero.
          if (draw.chance(0.002)) continue;
          rows.push({
            week: weekLabel(weekStart),
            weekStart,
            category: category.name,
            line: line.name,
            item: item.code,
            itemName: item.name,
            location: location.code,
            units,
            netValue: wholeCents(units * price),
            price,
            regularPrice,
            feature: promotion.feature,
            display: promotion.display,
            multibuy: promotion.multibuy,
            gap,
          });
        }
      }
    }
  }
  return rows;
}

/** Planned promotions and regular prices from the week `from` of the story on: a row where an item is promoted or its price changes. */
export function generateCalendar(
  category: DemoCategory,
  from: number,
  at: readonly DemoLocation[] = locations,
): CalendarRow[] {
  const rows: CalendarRow[] = [];
  for (const line of category.lines) {
    const stories = tellStories(line, drawGenerator(seed, `${category.slug}/${line.name}`));
    for (const { item, regularPrices, promotions } of stories) {
      if (item.toWeek !== undefined && item.toWeek <= from) continue;
      for (let week = from; week < totalWeeks; week += 1) {
        const promotion = promotions[week] ?? noPromotion;
        const regularPrice = regularPrices[week] ?? item.price;
        const isChange = regularPrice !== regularPrices[week - 1];
        if (promotion === noPromotion && !isChange) continue;
        const weekStart = addWeeks(firstWeek, week);
        for (const location of at) {
          rows.push({
            week: weekLabel(weekStart),
            weekStart,
            category: category.name,
            line: line.name,
            item: item.code,
            location: location.code,
            regularPrice,
            depth: promotion.depth,
            feature: promotion.feature,
            display: promotion.display,
            multibuy: promotion.multibuy,
            promotion: promotion.name,
          });
        }
      }
    }
  }
  return rows;
}

export function findCategory(slug: string): DemoCategory {
  const category = categories.find((candidate) => candidate.slug === slug);
  if (!category) throw new Error(`no demo category ${slug}`);
  return category;
}

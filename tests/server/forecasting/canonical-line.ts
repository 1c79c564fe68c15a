import type { LineInput, PlannedWeek, SeriesInput, SoldWeek } from '../../../server/forecasting/types.ts';
import { addWeeks } from '../../../shared/domain/weeks.ts';
import { createNormal, createRandom } from '../../../server/forecasting/ranges/random.ts';

export const FIRST_WEEK = '2023-01-02';

export function soldWeek(index: number, over: Partial<SoldWeek> = {}): SoldWeek {
  return {
    weekStart: addWeeks(FIRST_WEEK, index),
    units: 100,
    price: 2,
    regularPrice: 2,
    feature: 0,
    display: 0,
    mechanics: {},
    gap: 0,
    daysOpen: 7,
    ...over,
  };
}

export function plannedWeek(index: number, over: Partial<PlannedWeek> = {}): PlannedWeek {
  return {
    weekStart: addWeeks(FIRST_WEEK, index),
    price: 2,
    regularPrice: 2,
    depth: Number.NaN,
    feature: 0,
    display: 0,
    mechanics: {},
    ...over,
  };
}

export interface GeneratedLine {
  items?: number;
  locations?: number;
  weeks?: number;
  horizon?: number;
  seed?: number;
  noise?: number;
  elasticity?: number;
  featureLift?: number;
  baseUnits?: number;
  /** Share of the weeks that are missing. */
  missing?: number;
}

/** A line whose ln units are level + elasticity·ln price + lift·feature + noise: effects are known by construction. */
export function generateLine({
  items = 4,
  locations = 1,
  weeks = 104,
  horizon = 8,
  seed = 1,
  noise = 0.2,
  elasticity = -2,
  featureLift = 0.5,
  baseUnits = 200,
  missing = 0,
}: GeneratedLine = {}): LineInput {
  const random = createRandom(seed);
  const normal = createNormal(random);
  const series: SeriesInput[] = [];
  for (let item = 0; item < items; item++) {
    for (let location = 0; location < locations; location++) {
      const sold: SoldWeek[] = [];
      const planned: PlannedWeek[] = [];
      for (let t = 0; t < weeks + horizon; t++) {
        const isPromoted = random() < 0.2;
        const price = isPromoted ? 2 * (0.7 + 0.2 * random()) : 2;
        const feature = isPromoted && random() < 0.5 ? 1 : 0;
        const linear = Math.log(baseUnits * (1 + item)) + elasticity * Math.log(price / 2) + featureLift * feature;
        const units = Math.max(1, Math.round(Math.exp(linear + noise * normal())));
        if (t >= weeks) planned.push(plannedWeek(t, { price, feature }));
        else if (random() >= missing) sold.push(soldWeek(t, { units, price, feature }));
      }
      series.push({
        item: `item-${item}`,
        location: `location-${location}`,
        unitStep: 1,
        sold,
        planned,
        listedFrom: null,
        listedTo: null,
      });
    }
  }
  return { line: 'line', series, holidays: [], origin: addWeeks(FIRST_WEEK, weeks - 1), horizon, seed: 7 };
}

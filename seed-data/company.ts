/**
 * The demo company and everything in it are invented: name, places, people and figures. Effects are on the natural-log scale,
 * so that a reader can hold what a fit finds against what the generator put in.
 */
export const companyName = 'Ostrel Provisions';

/** First trading week and number of weeks of the whole story; the last one comes as files to import by hand. */
export const firstWeek = '2023-12-04';
export const historyWeeks = 156;
export const plannedWeeks = 26;

export interface DemoLocation {
  code: string;
  /** Share of the company's sales. */
  size: number;
}

export const locations: readonly DemoLocation[] = [
  { code: 'Alderwick', size: 0.27 },
  { code: 'Brenholm', size: 0.21 },
  { code: 'Corvale', size: 0.17 },
  { code: 'Dunsmere', size: 0.14 },
  { code: 'Eskham', size: 0.12 },
  { code: 'Online', size: 0.09 },
];

/** How a line sells. */
export interface LineEffects {
  /** Elasticity of the regular price, and of the promotional cut. */
  regularElasticity: number;
  promotionElasticity: number;
  feature: number;
  display: number;
  multibuy: number;
  /** Share of the uplift missing in each of the two weeks after a promotion. */
  dip: number;
  /** Height and peak (ISO week) of the yearly wave. */
  seasonHeight: number;
  seasonPeakWeek: number;
  trendPerYear: number;
  /** Lifts in the week of a feast. */
  christmas: number;
  easter: number;
}

export interface DemoItem {
  code: string;
  name: string;
  /** Regular price at the start, EUR. */
  price: number;
  /** Weekly units of the whole company in an ordinary week. */
  units: number;
  /** First week of sales, counted from the start, where it isn't the first. */
  fromWeek?: number;
  /** First week no more listed. */
  toWeek?: number;
}

export interface DemoLine {
  name: string;
  effects: LineEffects;
  items: readonly DemoItem[];
}

export interface DemoCategory {
  name: string;
  slug: string;
  lines: readonly DemoLine[];
}

function items(
  prefix: string,
  rows: readonly [name: string, price: number, units: number, more?: Partial<DemoItem>][],
): DemoItem[] {
  return rows.map(([name, price, units, more], index) => ({
    code: `${prefix}-${String(index + 1).padStart(2, '0')}`,
    name,
    price,
    units,
    ...more,
  }));
}

export const categories: readonly DemoCategory[] = [
  {
    name: 'Hot drinks',
    slug: 'hot-drinks',
    lines: [
      {
        name: 'Ground coffee',
        effects: {
          regularElasticity: -1.5,
          promotionElasticity: -2.9,
          feature: 0.32,
          display: 0.24,
          multibuy: 0.2,
          dip: 0.18,
          seasonHeight: 0.11,
          seasonPeakWeek: 1,
          trendPerYear: 0.02,
          christmas: 0.16,
          easter: 0.06,
        },
        items: items('GC', [
          ['House roast 500 g', 6.49, 2100],
          ['House roast 250 g', 3.69, 1450],
          ['House roast 1 kg', 11.99, 460],
          ['Dark roast 500 g', 6.79, 1180],
          ['Dark roast 250 g', 3.89, 760],
          ['Mild roast 500 g', 6.69, 680],
          ['Decaffeinated 250 g', 4.29, 520],
          ['Espresso grind 250 g', 4.49, 880],
          ['Winter spice 250 g', 4.99, 210],
        ]),
      },
      {
        name: 'Tea',
        effects: {
          regularElasticity: -1.1,
          promotionElasticity: -2.1,
          feature: 0.25,
          display: 0.3,
          multibuy: 0.28,
          dip: 0.12,
          seasonHeight: 0.24,
          seasonPeakWeek: 3,
          trendPerYear: 0.04,
          christmas: 0.1,
          easter: 0,
        },
        items: items('TE', [
          ['Breakfast black 50 bags', 2.49, 1500],
          ['Breakfast black 100 bags', 4.49, 720],
          ['Smoky black 25 bags', 2.79, 240],
          ['Green leaf 25 bags', 2.69, 530],
          ['Peppermint 25 bags', 2.29, 860],
          ['Camomile 25 bags', 2.29, 610],
          ['Rosehip 25 bags', 2.39, 380],
          ['Ginger and lemon 20 bags', 2.89, 420, { fromWeek: 84 }],
        ]),
      },
      {
        name: 'Cocoa',
        effects: {
          regularElasticity: -1.3,
          promotionElasticity: -2.4,
          feature: 0.3,
          display: 0.26,
          multibuy: 0.15,
          dip: 0.1,
          seasonHeight: 0.42,
          seasonPeakWeek: 51,
          trendPerYear: 0,
          christmas: 0.2,
          easter: 0,
        },
        items: items('CO', [
          ['Drinking chocolate 400 g', 3.49, 640],
          ['Drinking chocolate 800 g', 5.99, 230],
          ['Baking cocoa 250 g', 2.99, 410],
          ['Dark drinking chocolate 300 g', 4.29, 260],
          ['White drinking chocolate 300 g', 4.29, 140],
          ['Malted cocoa 400 g', 3.89, 180],
        ]),
      },
    ],
  },
  {
    name: 'Pantry',
    slug: 'pantry',
    lines: [
      {
        name: 'Pasta',
        effects: {
          regularElasticity: -1.7,
          promotionElasticity: -3.2,
          feature: 0.36,
          display: 0.22,
          multibuy: 0.34,
          dip: 0.22,
          seasonHeight: 0.05,
          seasonPeakWeek: 42,
          trendPerYear: 0.03,
          christmas: -0.08,
          easter: -0.04,
        },
        items: items('PA', [
          ['Spaghetti 500 g', 1.19, 3900],
          ['Penne 500 g', 1.19, 3100],
          ['Fusilli 500 g', 1.19, 2700],
          ['Tagliatelle 500 g', 1.49, 1300],
          ['Lasagne sheets 500 g', 1.79, 900],
          ['Wholemeal spaghetti 500 g', 1.39, 780],
          ['Wholemeal penne 500 g', 1.39, 690],
          ['Soup shells 250 g', 0.89, 640],
        ]),
      },
      {
        name: 'Preserves',
        effects: {
          regularElasticity: -1.2,
          promotionElasticity: -2,
          feature: 0.22,
          display: 0.18,
          multibuy: 0.12,
          dip: 0.08,
          seasonHeight: 0.08,
          seasonPeakWeek: 9,
          trendPerYear: -0.03,
          christmas: 0.05,
          easter: 0.14,
        },
        items: items('PR', [
          ['Strawberry jam 340 g', 2.19, 1250],
          ['Apricot jam 340 g', 2.19, 820],
          ['Sour cherry jam 340 g', 2.39, 560],
          ['Bitter orange marmalade 340 g', 2.49, 430],
          ['Blossom honey 500 g', 5.49, 690],
          ['Forest honey 500 g', 6.29, 310],
          ['Quince jelly 250 g', 3.29, 120, { toWeek: 118 }],
        ]),
      },
      {
        name: 'Baking',
        effects: {
          regularElasticity: -0.9,
          promotionElasticity: -1.8,
          feature: 0.28,
          display: 0.34,
          multibuy: 0.18,
          dip: 0.15,
          seasonHeight: 0.3,
          seasonPeakWeek: 49,
          trendPerYear: 0.01,
          christmas: 0.28,
          easter: 0.22,
        },
        items: items('BA', [
          ['Wheat flour 1 kg', 0.99, 4200],
          ['Spelt flour 1 kg', 1.89, 980],
          ['Rye flour 1 kg', 1.59, 620],
          ['Caster sugar 1 kg', 1.29, 2400],
          ['Icing sugar 250 g', 0.89, 900],
          ['Baking powder 10 sachets', 0.79, 1300],
          ['Vanilla sugar 10 sachets', 0.99, 1100],
        ]),
      },
    ],
  },
  {
    name: 'Refreshments',
    slug: 'refreshments',
    lines: [
      {
        name: 'Fruit juice',
        effects: {
          regularElasticity: -1.8,
          promotionElasticity: -2.7,
          feature: 0.4,
          display: 0.28,
          multibuy: 0.3,
          dip: 0.16,
          seasonHeight: 0.09,
          seasonPeakWeek: 27,
          trendPerYear: -0.02,
          christmas: 0.04,
          easter: 0.08,
        },
        items: items('FJ', [
          ['Orange juice 1 l', 2.29, 2600],
          ['Orange juice with pulp 1 l', 2.49, 880],
          ['Apple juice cloudy 1 l', 1.89, 1900],
          ['Apple juice clear 1 l', 1.79, 1250],
          ['Grape juice 1 l', 2.39, 620],
          ['Multifruit 1 l', 2.19, 1400],
          ['Carrot and orange 750 ml', 2.69, 330],
          ['Pear nectar 1 l', 2.29, 410],
        ]),
      },
      {
        name: 'Sparkling water',
        effects: {
          regularElasticity: -1,
          promotionElasticity: -2.2,
          feature: 0.2,
          display: 0.2,
          multibuy: 0.36,
          dip: 0.2,
          seasonHeight: 0.33,
          seasonPeakWeek: 29,
          trendPerYear: 0.06,
          christmas: -0.05,
          easter: 0,
        },
        items: items('SW', [
          ['Sparkling water 6 × 1 l', 2.99, 3300],
          ['Lightly sparkling 6 × 1 l', 2.99, 2500],
          ['Sparkling water 6 × 500 ml', 2.49, 1400],
          ['Lemon sparkling 1 l', 0.99, 900],
          ['Lime sparkling 1 l', 0.99, 640],
          ['Elderflower sparkling 1 l', 1.29, 520, { fromWeek: 104 }],
          ['Grapefruit sparkling 1 l', 1.09, 380],
        ]),
      },
    ],
  },
];

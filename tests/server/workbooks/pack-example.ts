import type { PackContent, PackLine, PackRow } from '../../../server/workbooks/pack/pack-content.ts';
import { listWeeks } from '../../../shared/domain/weeks.ts';

/** Texts that a careless spreadsheet would run or break on. */
export const HOSTILE_TEXTS = [
  '=1+1',
  '=HYPERLINK("http://example.invalid","x")',
  '+1+1',
  '-1+1',
  '@SUM(1+1)',
  '\tTab first',
  '\rReturn first',
  "=cmd|' /C calc'!A0",
  '<b>&amp;</b>',
  '"quoted", comma; semicolon',
  'Łódź ß 日本 😀',
];

/** A pack of `lines` lines with invented figures that follow from their place alone. */
export function makePackContent(
  changes: Partial<PackContent> & { lineCount?: number; weeks?: number; itemsPerLine?: number } = {},
): PackContent {
  const { lineCount = 3, weeks = 13, itemsPerLine = 5, ...rest } = changes;
  const weekStarts = listWeeks('2026-11-30', weeks);
  const names = [
    'Ground coffee',
    'Coffee beans',
    'Instant coffee',
    'Coffee pods',
    'Black tea',
    'Herbal and fruit tea',
    'Drinking chocolate',
  ];
  const lines = Array.from({ length: lineCount }, (_, index) =>
    makeLine(names[index] ?? `Line ${index + 1}`, index, weeks, itemsPerLine),
  );
  const sums = addUpLines(lines);
  return {
    category: 'Hot drinks',
    number: 14,
    weekStarts,
    currency: 'GBP',
    isVatIncluded: false,
    builtAt: new Date('2026-11-27T14:02:00Z'),
    builtBy: 'Maud Kessler',
    timeZone: 'Europe/London',
    salesThroughWeek: '2026-11-16',
    controlTotals: sums,
    lines,
    overrides: [
      {
        line: 'Ground coffee',
        author: 'Ilse Brandt',
        at: new Date('2026-11-24T09:30:00Z'),
        reason: 'New listing',
        note: 'Two more shops list the half-kilo bag from week 50 on; they sold a tenth of the region’s units in the trial.',
        scope: 'Ground coffee 1 at North',
        firstWeek: '2026-12-07',
        lastWeek: '2027-02-22',
        operation: 'scale by',
        value: 1.1,
        effectUnits: 312,
      },
      {
        line: 'Coffee beans',
        author: 'Rowan Achter',
        at: new Date('2026-11-25T16:05:00Z'),
        reason: 'Supplier shortage',
        note: null,
        scope: 'Line total',
        firstWeek: '2026-12-21',
        lastWeek: '2026-12-21',
        operation: 'add',
        value: -120,
        effectUnits: -120,
      },
    ],
    assumptions: {
      prices: [
        {
          line: 'Ground coffee',
          item: 'GC-1',
          location: null,
          firstWeek: '2026-11-30',
          lastWeek: '2027-02-22',
          regularPrice: 3.99,
          price: 3.95,
        },
        {
          line: 'Coffee beans',
          item: 'CB-1',
          location: 'North',
          firstWeek: '2026-11-30',
          lastWeek: '2027-02-22',
          regularPrice: 12.5,
          price: null,
        },
      ],
      promotions: [
        {
          name: 'Winter warmer',
          line: 'Ground coffee',
          items: 'GC-1, GC-2',
          locations: 'all',
          firstWeek: '2026-12-14',
          lastWeek: '2026-12-21',
          mechanic: 'coupon',
          depthFraction: 0.25,
          featureFraction: 1,
          displayFraction: 0.5,
        },
      ],
      holidays: [
        { date: '2026-12-25', name: 'Christmas Day' },
        { date: '2027-01-01', name: 'New Year’s Day' },
      ],
      fits: [
        {
          line: 'Ground coffee',
          fittedAt: new Date('2026-11-23T08:00:00Z'),
          weeks: 156,
          series: 30,
          adjustedRSquared: 0.834,
          residualErrorFraction: 0.213,
          backTestErrorFraction: 0.187,
          remark: null,
        },
        {
          line: 'Coffee beans',
          fittedAt: null,
          weeks: 9,
          series: 5,
          adjustedRSquared: null,
          residualErrorFraction: null,
          backTestErrorFraction: null,
          remark: 'Too little history; simple average',
        },
      ],
      findings: [
        {
          line: 'Ground coffee',
          detail:
            'The planned price of GC-2 in 2027-W02 lies below every price seen so far; the model reaches outside what it knows there.',
        },
      ],
    },
    remarks: [
      'Black tea has stood above sales for five weeks.',
      'Prices of Coffee pods from 2027-W02 were never seen before.',
    ],
    ...rest,
  };
}

function makeLine(name: string, place: number, weeks: number, itemCount: number): PackLine {
  const code = name
    .split(' ')
    .map((word) => word[0]?.toUpperCase() ?? '')
    .join('');
  const rows = Array.from({ length: itemCount }, (_, item): PackRow => {
    const plan = Array.from({ length: weeks }, (_, week) => 20 + ((place * 37 + item * 53 + week * 17) % 180));
    return {
      item: `${code}-${item + 1}`,
      itemName: `${name} ${(item + 1) * 100} g`,
      location: item % 2 === 0 ? 'North' : null,
      plan,
      price: plan.map((_units, week) =>
        item === itemCount - 1 && week === 0 ? null : Math.round((2.29 + item * 0.7 + (week % 3) * 0.1) * 100) / 100,
      ),
      isOverridden: plan.map((_units, week) => item === 0 && week > 0 && week < 5),
      isPromoted: plan.map((_units, week) => item < 2 && (week === 2 || week === 3)),
    };
  });
  const totals = Array.from({ length: weeks }, (_, week) => rows.reduce((sum, { plan }) => sum + (plan[week] ?? 0), 0));
  const scaled = (factor: number) => totals.map((units) => Math.round(units * factor * 10) / 10);
  return {
    name,
    version: 11 - place,
    state: place === 1 ? 'submitted' : 'locked',
    lockedBy: place === 1 ? null : 'Rowan Achter',
    lockedAt: place === 1 ? null : new Date('2026-11-25T15:20:00Z'),
    isWeekLocked: totals.map((_units, week) => place !== 1 && (place !== 2 || week < 6)),
    rows,
    modelRange:
      place === 1
        ? null
        : { mean: scaled(0.98), p2_5: scaled(0.7), p10: scaled(0.82), p90: scaled(1.2), p97_5: scaled(1.37) },
    lastYearUnits: totals.map((units, week) => (place === 2 && week === 12 ? null : Math.round(units * 0.93))),
  };
}

export function addUpLines(lines: readonly PackLine[]): { units: number; netValue: number } {
  let units = 0;
  let cents = 0;
  for (const { rows } of lines) {
    for (const { plan, price } of rows) {
      plan.forEach((planned, week) => {
        units += planned;
        cents += planned * Math.round((price[week] ?? 0) * 100);
      });
    }
  }
  return { units, netValue: cents / 100 };
}

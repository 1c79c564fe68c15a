import { toDayNumber, weeksBetween } from '../../../shared/domain/weeks.ts';
import type { HolidayWeek } from '../types.ts';
import type { Column } from './column.ts';
import type { LinePanel } from './line-panel.ts';

export const TREND = 'trend';

const DAYS_IN_YEAR = 365.25;
const WEEKS_IN_YEAR = DAYS_IN_YEAR / 7;
const TREND_DAMPING = 0.9;

/** Fourier pairs 1…pairs over the year of 365.25 days, taken at the middle of the trading week; shared by the line. */
export function buildSeason(panel: LinePanel, pairs: number): Column[] {
  const columns: Column[] = [];
  for (let k = 1; k <= pairs; k++) {
    const angles = panel.weeks.map((weekStart) => (2 * Math.PI * k * (toDayNumber(weekStart) + 3.5)) / DAYS_IN_YEAR);
    const sine = Float64Array.from(angles, Math.sin);
    const cosine = Float64Array.from(angles, Math.cos);
    columns.push(shareColumn(panel, `season sine ${k}`, 'season', 0.3, sine));
    columns.push(shareColumn(panel, `season cosine ${k}`, 'season', 0.3, cosine));
  }
  return columns;
}

/** Years since the axis' start; after `lastWeek` each step is 0.9 of the one before (damped). */
export function buildTrend(panel: LinePanel, lastWeek: number): Column {
  let at = 0;
  let step = 1 / WEEKS_IN_YEAR;
  const values = Float64Array.from(panel.weeks, (_, t) => {
    if (t > 0) {
      if (t > lastWeek) step *= TREND_DAMPING;
      at += step;
    }
    return at;
  });
  return shareColumn(panel, TREND, 'trend', 0.3, values);
}

/**
 * For each holiday or own event three columns: the week before, of and after it. The seven shopping days up to the day itself are
 * shared out between the week before and the week of the day, the seven days after it between the week of and the week after:
 * a Sunday feast ends a Monday-to-Sunday week but starts a Sunday-to-Saturday one. A holiday never seen in a used week is left out.
 */
export function buildHolidays(panel: LinePanel, holidays: readonly HolidayWeek[]): Column[] {
  const first = panel.weeks[0]!;
  const byName = new Map<string, HolidayWeek[]>();
  for (const holiday of holidays) byName.set(holiday.name, [...(byName.get(holiday.name) ?? []), holiday]);
  const columns: Column[] = [];
  for (const [name, dates] of [...byName].sort(([a], [b]) => (a < b ? -1 : 1))) {
    const before = new Float64Array(panel.weeks.length);
    const of = new Float64Array(panel.weeks.length);
    const after = new Float64Array(panel.weeks.length);
    for (const date of dates) {
      const t = weeksBetween(first, date.weekStart);
      const daysUpTo = date.dayInWeek + 1;
      addAt(before, t - 1, (7 - daysUpTo) / 7);
      addAt(of, t, daysUpTo / 7);
      addAt(after, t + 1, daysUpTo / 7);
    }
    for (const [when, values] of [
      ['before', before],
      ['of', of],
      ['after', after],
    ] as const) {
      if (values.some((value, t) => t < panel.pastWeeks && value > 0)) {
        columns.push(shareColumn(panel, `${name}: week ${when}`, 'holiday', 0.25, values));
      }
    }
  }
  return columns;
}

function addAt(values: Float64Array, t: number, amount: number): void {
  if (t >= 0 && t < values.length) values[t]! += amount;
}

function shareColumn(
  panel: LinePanel,
  name: string,
  group: Column['group'],
  priorSpread: number,
  values: Float64Array,
): Column {
  return { name, group, hasOwnSlopes: false, sign: 0, priorSpread, values: panel.series.map(() => values) };
}

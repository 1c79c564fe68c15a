import { addDays } from '../../../shared/domain/weeks.ts';
import type { PackLine } from './pack-content.ts';

/** A calendar month of the pack: the weeks whose fourth day lies in it. */
export interface PackPeriod {
  /** `2026-12`. */
  month: string;
  /** Places of its first and last week in the pack's weeks. */
  first: number;
  last: number;
}

export function listPeriods(weekStarts: readonly string[]): PackPeriod[] {
  const periods: PackPeriod[] = [];
  weekStarts.forEach((weekStart, index) => {
    const month = addDays(weekStart, 3).slice(0, 7);
    const current = periods.at(-1);
    if (current?.month === month) current.last = index;
    else periods.push({ month, first: index, last: index });
  });
  return periods;
}

/** Figures of a line by week, as its sheet's formulas give them. */
export interface LineFigures {
  units: number[];
  netValue: number[];
  /** Per row over the weeks. */
  rowUnits: number[];
  rowNetValue: number[];
}

export function addUpLine(line: PackLine, weeks: number): LineFigures {
  const figures: LineFigures = {
    units: new Array<number>(weeks).fill(0),
    netValue: new Array<number>(weeks).fill(0),
    rowUnits: [],
    rowNetValue: [],
  };
  for (const row of line.rows) {
    let rowUnits = 0;
    let rowNetValue = 0;
    row.plan.forEach((units, week) => {
      const value = units * (row.price[week] ?? 0);
      figures.units[week]! += units;
      figures.netValue[week]! += value;
      rowUnits += units;
      rowNetValue += value;
    });
    figures.rowUnits.push(rowUnits);
    figures.rowNetValue.push(rowNetValue);
  }
  return figures;
}

export function addUp(values: readonly (number | null)[], first = 0, last = values.length - 1): number {
  let sum = 0;
  for (let index = first; index <= last; index += 1) sum += values[index] ?? 0;
  return sum;
}

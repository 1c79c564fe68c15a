import { describe, expect, it } from 'vitest';
import { addWeeks } from '../../../shared/domain/weeks.ts';
import {
  buildColumns,
  defaultWindow,
  historyWeeksToAsk,
  monthRuns,
  placePennants,
} from '../../../src/features/plan/grid-columns.ts';

const planFirstWeek = '2026-11-30';
const span = {
  historyFirstWeek: addWeeks(planFirstWeek, -10),
  planFirstWeek,
  planWeeks: 13,
  lockedWeeks: [planFirstWeek, addWeeks(planFirstWeek, 1)],
};

describe('buildColumns', () => {
  it('counts history and plan from their own first week and marks the seam', () => {
    const columns = buildColumns(span, addWeeks(planFirstWeek, -2), addWeeks(planFirstWeek, 1));
    expect(
      columns.map(({ label, kind, index, isLocked, isBeforeSeam }) => [label, kind, index, isLocked, isBeforeSeam]),
    ).toEqual([
      ['W47', 'history', 8, false, false],
      ['W48', 'history', 9, false, true],
      ['W49', 'plan', 0, true, false],
      ['W50', 'plan', 1, true, false],
    ]);
  });

  it('holds back at what is known', () => {
    const columns = buildColumns(span, '2020-01-06', '2030-01-07');
    expect(columns).toHaveLength(23);
    expect(columns.at(-1)?.weekStart).toBe(addWeeks(planFirstWeek, 12));
  });

  it('has no seam where only history is shown', () => {
    const columns = buildColumns(span, addWeeks(planFirstWeek, -3), addWeeks(planFirstWeek, -1));
    expect(columns.some(({ isBeforeSeam }) => isBeforeSeam)).toBe(false);
  });

  it('numbers week 53 and the turn of the year', () => {
    const columns = buildColumns(span, addWeeks(planFirstWeek, 3), addWeeks(planFirstWeek, 6));
    expect(columns.map(({ fullLabel }) => fullLabel)).toEqual(['2026-W52', '2026-W53', '2027-W01', '2027-W02']);
  });
});

describe('window and history', () => {
  it('shows the whole plan and some history at first', () => {
    expect(defaultWindow(span)).toEqual({
      from: addWeeks(planFirstWeek, -6),
      to: addWeeks(planFirstWeek, 12),
    });
    expect(defaultWindow({ ...span, planFirstWeek: null })).toBeNull();
  });

  it('asks for history in a few sizes', () => {
    expect(historyWeeksToAsk(null, planFirstWeek)).toBe(26);
    expect(historyWeeksToAsk(addWeeks(planFirstWeek, -27), planFirstWeek)).toBe(52);
    expect(historyWeeksToAsk(addWeeks(planFirstWeek, -900), planFirstWeek)).toBe(520);
  });
});

describe('monthRuns', () => {
  it('names a week’s month by its fourth day and never crosses the seam', () => {
    const columns = buildColumns(span, addWeeks(planFirstWeek, -2), addWeeks(planFirstWeek, 5));
    expect(monthRuns(columns)).toEqual([
      { value: '2026-11', first: 0, last: 1 },
      { value: '2026-12', first: 2, last: 6 },
      { value: '2027-01', first: 7, last: 7 },
    ]);
  });
});

describe('placePennants', () => {
  const columns = buildColumns(span, addWeeks(planFirstWeek, -2), addWeeks(planFirstWeek, 9));
  const promotion = (name: string, from: number, to: number) => ({
    name,
    firstWeek: addWeeks(planFirstWeek, from),
    lastWeek: addWeeks(planFirstWeek, to),
  });

  it('joins the same promotion on several items and cuts it at the window', () => {
    const { pennants } = placePennants([promotion('Advent', -5, 0), promotion('Advent', -5, 1)], columns, 3);
    expect(pennants).toEqual([expect.objectContaining({ name: 'Advent', first: 0, last: 3, lane: 0, count: 2 })]);
  });

  it('keeps two runs of one name apart', () => {
    const { pennants } = placePennants([promotion('Cut', 0, 1), promotion('Cut', 4, 5)], columns, 3);
    expect(pennants.map(({ first, last }) => [first, last])).toEqual([
      [2, 3],
      [6, 7],
    ]);
  });

  it('puts what overlaps into lanes and counts what finds none', () => {
    const { pennants, hidden } = placePennants(
      [promotion('A', 0, 3), promotion('B', 1, 2), promotion('C', 2, 4), promotion('D', 4, 5)],
      columns,
      2,
    );
    expect(pennants.map(({ name, lane }) => [name, lane])).toEqual([
      ['A', 0],
      ['B', 1],
      ['D', 0],
    ]);
    expect(hidden).toBe(1);
  });

  it('leaves out what lies outside the window', () => {
    expect(placePennants([promotion('Later', 20, 21)], columns, 3)).toEqual({ pennants: [], hidden: 0 });
  });
});

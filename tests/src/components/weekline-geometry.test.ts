import { describe, expect, it } from 'vitest';
import {
  chooseScaleLines,
  findRuns,
  listBandWeeks,
  moveHandle,
  moveRange,
  stepOfKey,
  toPositions,
} from '../../../src/components/weekline-geometry.ts';

const sold = Array.from({ length: 60 }, (_, index) => 100 + index);

describe('the weeks of the band', () => {
  const weeks = listBandWeeks({
    firstWeek: '2025-10-06',
    sold,
    planned: [200, 210],
    promotedWeeks: ['2026-11-30'],
    lockedWeeks: ['2026-11-30', '2026-12-07'],
    holidays: [{ name: 'Fair day', weekStart: '2026-11-30', date: '2026-12-02' }],
  });

  it('put sold weeks before planned ones and mark each', () => {
    expect(weeks).toHaveLength(62);
    expect(weeks[59]).toMatchObject({ weekStart: '2026-11-23', units: 159, isPlanned: false });
    expect(weeks[60]).toMatchObject({
      weekStart: '2026-11-30',
      units: 200,
      isPlanned: true,
      isPromoted: true,
      isLocked: true,
      holidays: ['Fair day'],
    });
  });

  it('hold a planned week against the one 52 weeks before', () => {
    expect(weeks[60]?.lastYear).toBe(sold[8]);
    expect(weeks[59]?.lastYear).toBeNull();
  });
});

describe('the handles', () => {
  it('never cross and never leave the band', () => {
    expect(moveHandle([3, 9], 'first', 20, 12)).toEqual([9, 9]);
    expect(moveHandle([3, 9], 'first', -20, 12)).toEqual([0, 9]);
    expect(moveHandle([3, 9], 'last', 20, 12)).toEqual([3, 11]);
    expect(moveHandle([3, 9], 'last', -20, 12)).toEqual([3, 3]);
  });

  it('moved together keep their distance, even at the rim', () => {
    expect(moveHandle([3, 9], 'both', 20, 12)).toEqual([5, 11]);
    expect(moveHandle([3, 9], 'both', -20, 12)).toEqual([0, 6]);
  });

  it('obey the keys of a slider and leave others alone', () => {
    expect(['ArrowLeft', 'ArrowRight', 'PageUp', 'End', 'Tab'].map((key) => stepOfKey(key, 100))).toEqual([
      -1,
      1,
      4,
      100,
      null,
    ]);
  });

  it('translate weeks into positions', () => {
    expect(toPositions({ firstWeek: '2025-10-20', lastWeek: '2025-11-03' }, '2025-10-06', 62)).toEqual([2, 4]);
  });

  it('leave the other end where the page has it, even beyond the band', () => {
    const range = { firstWeek: '2026-11-23', lastWeek: '2027-03-22' };
    expect(moveRange(range, [59, 61], [57, 61], 'first')).toEqual({
      firstWeek: '2026-11-09',
      lastWeek: '2027-03-22',
    });
    expect(moveRange(range, [59, 61], [59, 60], 'last')).toEqual({ firstWeek: '2026-11-23', lastWeek: '2027-03-15' });
    expect(moveRange(range, [59, 61], [58, 60], 'both')).toEqual({ firstWeek: '2026-11-16', lastWeek: '2027-03-15' });
  });

  it('clamp a range that reaches beyond the band', () => {
    expect(toPositions({ firstWeek: '2020-01-06', lastWeek: '2030-01-07' }, '2025-10-06', 62)).toEqual([0, 61]);
  });
});

it('finds runs of neighbouring weeks', () => {
  const marks = [true, true, false, true];
  expect(findRuns(4, (position) => marks[position] ?? false)).toEqual([
    [0, 1],
    [3, 3],
  ]);
});

it.each([
  [53_000, [20_000, 40_000]],
  [22_500, [10_000, 20_000]],
  [9, [2, 4]],
  [0, []],
])('draws round lines behind a band up to %d', (highest, lines) => {
  expect(chooseScaleLines(highest)).toEqual(lines);
});

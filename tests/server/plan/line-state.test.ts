import { describe, expect, test } from 'vitest';
import {
  deriveLineState,
  joinLockedWeeks,
  joinWeeks,
  type LineHead,
} from '../../../server/features/plan/line-state.ts';
import { listWeeks } from '../../../shared/domain/weeks.ts';

const weeks = listWeeks('2026-11-30', 6);
const lock = (week: number, version = 2) => ({
  weekStart: weeks[week]!,
  version,
  actor: 'Lea',
  at: `2026-12-0${version}`,
});

function head(given: {
  locked?: number[];
  handOver?: 'submitted' | 'returned' | 'lapsed';
  isSpent?: boolean;
  round?: [number, number] | null;
}) {
  const { locked = [], handOver, isSpent = false, round = [0, 3] } = given;
  const state: Pick<LineHead, 'run' | 'locked' | 'handOver' | 'isHandOverSpent' | 'round'> = {
    run: {
      id: 1,
      at: '',
      salesTo: '2026-11-23',
      salesRevision: 1,
      calendarRevision: 1,
      firstWeek: weeks[0]!,
      weeks: 6,
    },
    locked: locked.map((week) => lock(week)),
    handOver: handOver ? { state: handOver, version: 2, actor: 'Pia', actorId: 1, at: '', comment: null } : null,
    isHandOverSpent: isSpent,
    round: round && { id: 1, opens: '', due: '', firstWeek: weeks[round[0]]!, lastWeek: weeks[round[1]]! },
  };
  return state;
}

describe('the state of a line', () => {
  test('is draft until it is submitted, and again once that was returned, lapsed or spent', () => {
    expect(deriveLineState(head({}))).toBe('draft');
    expect(deriveLineState(head({ handOver: 'submitted' }))).toBe('submitted');
    expect(deriveLineState(head({ handOver: 'returned' }))).toBe('draft');
    expect(deriveLineState(head({ handOver: 'lapsed' }))).toBe('draft');
    expect(deriveLineState(head({ handOver: 'submitted', isSpent: true }))).toBe('draft');
  });

  test('is locked when every planned week of the round is, whatever lies outside it', () => {
    expect(deriveLineState(head({ handOver: 'submitted', locked: [0, 1, 2] }))).toBe('submitted');
    expect(deriveLineState(head({ handOver: 'submitted', locked: [0, 1, 2, 3] }))).toBe('locked');
    expect(deriveLineState(head({ locked: [0, 1, 2, 3], round: null }))).toBe('draft');
    expect(deriveLineState(head({ locked: [0, 1, 2, 3, 4, 5], round: null }))).toBe('locked');
  });

  test('is draft before the first forecast', () => {
    expect(deriveLineState({ ...head({}), run: null })).toBe('draft');
  });
});

test('locked weeks are told as runs of one lock each', () => {
  expect(joinLockedWeeks([lock(0), lock(1), lock(2, 3), lock(4, 3)])).toEqual([
    { firstWeek: weeks[0], lastWeek: weeks[1], version: 2, actor: 'Lea', at: '2026-12-02' },
    { firstWeek: weeks[2], lastWeek: weeks[2], version: 3, actor: 'Lea', at: '2026-12-03' },
    { firstWeek: weeks[4], lastWeek: weeks[4], version: 3, actor: 'Lea', at: '2026-12-03' },
  ]);
});

test('weeks are joined into runs in whatever order they come', () => {
  expect(joinWeeks([weeks[3]!, weeks[0]!, weeks[1]!])).toEqual([
    { firstWeek: weeks[0], lastWeek: weeks[1] },
    { firstWeek: weeks[3], lastWeek: weeks[3] },
  ]);
  expect(joinWeeks([])).toEqual([]);
});

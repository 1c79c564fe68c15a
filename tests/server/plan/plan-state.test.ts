import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { comparePlans, describeOverrides, findClashes } from '../../../server/features/plan/plan-state.ts';
import type { StoredOverride } from '../../../server/features/plan/plan.repository.ts';
import { scopesMeet } from '../../../shared/domain/override-arithmetic.ts';
import { addWeeks, listWeeks } from '../../../shared/domain/weeks.ts';

const firstWeek = '2026-11-30';
const weeks = listWeeks(firstWeek, 4);

function stored(id: number, given: Partial<StoredOverride>): StoredOverride {
  return {
    id,
    sequence: id,
    lineId: 1,
    scope: { itemId: 1, locationId: 1 },
    firstWeek: weeks[0]!,
    lastWeek: weeks[3]!,
    operation: 'set to',
    value: 10,
    version: id,
    authorId: 1,
    author: 'Pia',
    at: '',
    reasonId: 1,
    reason: null,
    note: null,
    baseModel: [100, 100, 100, 100],
    ...given,
  };
}

describe('overrides in force', () => {
  const series = [
    { itemId: 1, locationId: 1, unitStep: 1, model: [100, 100, 130, 100] },
    { itemId: 2, locationId: 1, unitStep: 1, model: [50, 50, 50, 50] },
  ];
  const describeThese = (overrides: StoredOverride[], lockedWeeks: string[] = []) =>
    describeOverrides({
      window: { firstWeek, weeks: 4 },
      series,
      overrides,
      lockedWeeks,
      unmet: overrides.map(({ id }) => ({ id, weekStart: weeks[2]!, reason: 'fixed' as const })),
      lookThreshold: 0.05,
    });

  test('are due another look where the model moved by more than the threshold in weeks that they still decide', () => {
    const [only] = describeThese([stored(1, {})]);
    expect(only).toMatchObject({ isDueAnotherLook: true, needsDecision: expect.stringContaining('2026-W51') });
    expect(describeThese([stored(1, {})], [weeks[2]!])[0]).toMatchObject({
      isDueAnotherLook: false,
      needsDecision: null,
    });
    const later = stored(2, { firstWeek: weeks[2]!, lastWeek: weeks[2]!, baseModel: [130] });
    expect(describeThese([stored(1, {}), later]).map(({ isDueAnotherLook }) => isDueAnotherLook)).toEqual([
      false,
      false,
    ]);
  });

  test('leave out what was cleared everywhere, and keep a clear only while it matters', () => {
    const clear = (id: number, first: number, last: number) =>
      stored(id, { operation: 'clear', value: null, firstWeek: weeks[first]!, lastWeek: weeks[last]! });
    expect(describeThese([stored(1, {}), clear(2, 0, 3)])).toEqual([]);
    expect(describeThese([stored(1, {}), clear(2, 1, 1), clear(3, 2, 2)]).map(({ id }) => id)).toEqual([1, 2, 3]);
    expect(describeThese([clear(1, 0, 3), stored(2, {})]).map(({ id }) => id)).toEqual([2]);
  });
});

test('a save clashes with exactly those newer overrides of others that share a cell with it, the newest first to be told', () => {
  const scope = fc.record({
    itemId: fc.option(fc.integer({ min: 1, max: 3 })),
    locationId: fc.option(fc.integer({ min: 1, max: 3 })),
  });
  const change = fc.record({
    scope,
    from: fc.integer({ min: 0, max: 3 }),
    length: fc.integer({ min: 0, max: 2 }),
    authorId: fc.integer({ min: 1, max: 2 }),
  });
  fc.assert(
    fc.property(
      fc.array(change, { maxLength: 8 }),
      fc.array(change, { minLength: 1, maxLength: 4 }),
      fc.integer({ min: 0, max: 6 }),
      (earlier, own, baseVersion) => {
        const range = ({ from, length }: { from: number; length: number }) => ({
          firstWeek: addWeeks(firstWeek, from),
          lastWeek: addWeeks(firstWeek, from + length),
        });
        const overrides = earlier.map((one, index) =>
          stored(index + 1, { scope: one.scope, authorId: one.authorId, ...range(one) }),
        );
        const edits = own.map((one) => ({ scope: one.scope, ...range(one) }));
        const expected = new Map<string, number>();
        for (const edit of edits) {
          for (const week of listWeeks(firstWeek, 8)) {
            if (week < edit.firstWeek || week > edit.lastWeek) continue;
            for (const other of overrides) {
              if (other.authorId === 1 || other.version <= baseVersion || !scopesMeet(edit.scope, other.scope))
                continue;
              if (week >= other.firstWeek && week <= other.lastWeek)
                expected.set(JSON.stringify([edit.scope, week]), other.id);
            }
          }
        }
        const found = findClashes(edits, overrides, { baseVersion, authorId: 1 });
        expect(new Map(found.map((one) => [JSON.stringify([one.scope, one.weekStart]), one.theirs.id]))).toEqual(
          expected,
        );
      },
    ),
    { numRuns: 500 },
  );
});

test('two states are compared cell by cell', () => {
  expect(
    comparePlans(
      [
        [1, 2],
        [3, 0.1],
      ],
      [
        [1, 5],
        [3, 0.3],
      ],
    ),
  ).toEqual({
    changedCells: 2,
    changedUnits: 3.2,
    changedSeries: [0, 1],
  });
});

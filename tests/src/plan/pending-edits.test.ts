import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { replayOverrides } from '../../../shared/domain/override-arithmetic.ts';
import { addWeeks } from '../../../shared/domain/weeks.ts';
import {
  addStep,
  compactEdits,
  editsForCells,
  editsForValues,
  noEdits,
  redoStep,
  settleEdits,
  undoStep,
  type PendingEdit,
} from '../../../src/features/plan/pending-edits.ts';

const first = '2026-11-30';
const week = (index: number) => addWeeks(first, index);
const item = (itemId: number) => ({ itemId, locationId: null });
const line = { itemId: null, locationId: null };
const edit = (
  scope: PendingEdit['scope'],
  at: number,
  operation: PendingEdit['operation'],
  value: number | null,
  until = at,
): PendingEdit => ({ scope, firstWeek: week(at), lastWeek: week(until), operation, value });

describe('undo and redo', () => {
  it('takes back a whole step and brings it again', () => {
    const a = [edit(item(1), 0, 'set to', 5)];
    const b = [edit(item(2), 0, 'add', 1), edit(item(2), 1, 'add', 1)];
    const both = addStep(addStep(noEdits, a, 14), b, 15);
    expect(undoStep(both).done).toEqual([a]);
    expect(redoStep(undoStep(both)).done).toEqual([a, b]);
  });

  it('keeps the version that was on screen at the first edit', () => {
    const held = addStep(addStep(noEdits, [edit(line, 0, 'add', 1)], 14), [edit(line, 1, 'add', 1)], 15);
    expect(held.baseVersion).toBe(14);
  });

  it('forgets what was taken back once something new is done', () => {
    const undone = undoStep(addStep(noEdits, [edit(line, 0, 'add', 1)], 14));
    expect(addStep(undone, [edit(line, 1, 'add', 2)], 14).undone).toEqual([]);
  });

  it('does nothing at either end', () => {
    expect(undoStep(noEdits)).toBe(noEdits);
    expect(redoStep(noEdits)).toBe(noEdits);
  });
});

describe('compactEdits', () => {
  it('keeps only the last value typed into a cell', () => {
    expect(compactEdits([[edit(item(1), 0, 'set to', 5)], [edit(item(1), 0, 'set to', 7)]])).toEqual([
      edit(item(1), 0, 'set to', 7),
    ]);
  });

  it('keeps raises and factors before one another', () => {
    const steps = [[edit(item(1), 0, 'scale by', 1.1)], [edit(item(1), 0, 'scale by', 1.1)]];
    expect(compactEdits(steps)).toHaveLength(2);
  });

  it('keeps an earlier value where a total was changed in between', () => {
    const steps = [[edit(item(1), 0, 'set to', 5)], [edit(line, 0, 'scale by', 2)], [edit(item(1), 0, 'set to', 5)]];
    expect(compactEdits(steps)).toHaveLength(3);
  });

  it('joins following weeks with the same change', () => {
    const steps = [[edit(item(1), 0, 'scale by', 1.1)], [edit(item(1), 1, 'scale by', 1.1)]];
    expect(compactEdits(steps)).toEqual([edit(item(1), 0, 'scale by', 1.1, 1)]);
  });

  it('drops a clear of what was never saved, and what it cleared', () => {
    const steps = [[edit(item(1), 0, 'set to', 5)], [edit(item(1), 0, 'clear', null)]];
    expect(compactEdits(steps, () => false)).toEqual([]);
    expect(compactEdits(steps, () => true)).toEqual([edit(item(1), 0, 'clear', null)]);
  });

  const series = [1, 2].flatMap((itemId) =>
    [1, 2].map((locationId) => ({ itemId, locationId, unitStep: 1, model: [40, 0, 25] })),
  );
  const ofSeries = [
    { itemId: 1, locationId: 1 },
    { itemId: 1, locationId: 2 },
    { itemId: 2, locationId: 1 },
  ];
  const anyScope = fc.constantFrom(line, item(1), item(2), { itemId: null, locationId: 1 }, ...ofSeries);
  const weeks = fc.tuple(fc.integer({ min: 0, max: 2 }), fc.integer({ min: 0, max: 2 }));
  const change = fc.oneof(
    fc.record({ operation: fc.constant('set to' as const), value: fc.integer({ min: 0, max: 300 }) }),
    fc.record({ operation: fc.constant('add' as const), value: fc.integer({ min: -30, max: 60 }) }),
    fc.record({ operation: fc.constant('scale by' as const), value: fc.constantFrom(0.5, 1.1, 2) }),
  );
  const changesOf = (scopes: fc.Arbitrary<PendingEdit['scope']>) =>
    fc
      .tuple(scopes, weeks, change)
      .map(([scope, [at, length], { operation, value }]) =>
        edit(scope, at, operation, value, Math.min(2, at + length)),
      );
  const clears = fc
    .tuple(anyScope, weeks)
    .map(([scope, [at, length]]) => edit(scope, at, 'clear', null, Math.min(2, at + length)));
  const stepsOf = (scopes: fc.Arbitrary<PendingEdit['scope']>) =>
    fc.array(fc.array(fc.oneof(changesOf(scopes), clears), { maxLength: 3 }), { maxLength: 5 });
  const replay = (edits: readonly PendingEdit[]) =>
    replayOverrides({
      series,
      planFirstWeek: first,
      planWeeks: 3,
      lockedWeeks: [],
      lockedPlan: null,
      overrides: edits.map((each, index) => ({ ...each, id: index + 1, sequence: index + 1 })),
    }).plan;

  it('gives the same plan where changes are of single series', () => {
    fc.assert(
      fc.property(stepsOf(fc.constantFrom(...ofSeries)), (steps) => {
        expect(replay(compactEdits(steps, () => false))).toEqual(replay(steps.flat()));
      }),
      { numRuns: 300 },
    );
  });
});

describe('edits from a selection and from a paste', () => {
  it('makes one override per row over following weeks, and leaves locked weeks out', () => {
    const weeks = [0, 1, 2, 3].map(week);
    const isOpen = (weekStart: string) => weekStart !== week(1);
    expect(editsForCells([item(1), item(2)], weeks, 'scale by', 1.05, isOpen)).toEqual([
      edit(item(1), 0, 'scale by', 1.05),
      edit(item(1), 2, 'scale by', 1.05, 3),
      edit(item(2), 0, 'scale by', 1.05),
      edit(item(2), 2, 'scale by', 1.05, 3),
    ]);
  });

  it('joins equal pasted values of one row', () => {
    const cells = [
      { scope: item(1), weekStart: week(0), value: 5 },
      { scope: item(1), weekStart: week(1), value: 5 },
      { scope: item(2), weekStart: week(2), value: 5 },
    ];
    expect(editsForValues(cells)).toEqual([edit(item(1), 0, 'set to', 5, 1), edit(item(2), 2, 'set to', 5)]);
  });
});

describe('settleEdits', () => {
  const edits = [edit(item(1), 0, 'scale by', 1.1, 2), edit(item(2), 0, 'set to', 9)];

  it('drops this person’s change where the other value is kept, and nothing else', () => {
    const settled = settleEdits(edits, [{ scope: item(1), weekStart: week(1), keep: 'theirs', yours: 44 }]);
    expect(settled).toEqual([
      edit(item(1), 0, 'scale by', 1.1),
      edit(item(1), 2, 'scale by', 1.1),
      edit(item(2), 0, 'set to', 9),
    ]);
  });

  it('saves exactly the value that was on screen where it is kept', () => {
    const settled = settleEdits(edits, [{ scope: item(1), weekStart: week(1), keep: 'yours', yours: 44 }]);
    expect(settled).toContainEqual(edit(item(1), 1, 'set to', 44));
    expect(settled).toContainEqual(edit(item(2), 0, 'set to', 9));
  });

  it('leaves a value that was set, and a clear, as they are', () => {
    const held = [edit(item(1), 0, 'clear', null), edit(item(2), 0, 'set to', 9)];
    const settled = settleEdits(held, [
      { scope: item(1), weekStart: week(0), keep: 'yours', yours: 40 },
      { scope: item(2), weekStart: week(0), keep: 'yours', yours: 9 },
    ]);
    expect(settled).toEqual(held);
  });
});

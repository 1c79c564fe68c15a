import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { mayDo, permissionTable, reachOf, rights, roles, type Assignment } from '../../../shared/domain/roles.ts';

const anyAssignments: fc.Arbitrary<Assignment[]> = fc.array(
  fc.record({ role: fc.constantFrom(...roles), categoryId: fc.option(fc.integer({ min: 1, max: 4 })) }),
  { maxLength: 4 },
);

describe('permissions', () => {
  it('keep a planner inside the own categories', () => {
    const planner: Assignment[] = [{ role: 'planner', categoryId: 2 }];
    expect(mayDo(planner, 'override-draft', 2)).toBe(true);
    expect(mayDo(planner, 'override-draft', 3)).toBe(false);
    expect(mayDo(planner, 'lock-line', 2)).toBe(false);
    expect(reachOf(planner, 'see-category')).toEqual([2]);
  });

  it('let a category lead lock but nobody but finance and leads build a pack', () => {
    const may = (right: (typeof rights)[number]) => roles.filter((role) => right in permissionTable[role]);
    expect(may('lock-line')).toEqual(['category-lead']);
    expect(may('build-pack')).toEqual(['category-lead', 'finance']);
    expect(may('import-sales')).toEqual(['planner', 'category-lead']);
    expect(may('administer')).toEqual(['administrator']);
  });

  it('let finance and administrators see every category, whatever they are assigned to', () => {
    expect(reachOf([{ role: 'finance', categoryId: 1 }], 'see-category')).toBe('all');
    expect(reachOf([{ role: 'administrator', categoryId: null }], 'see-category')).toBe('all');
  });

  it('never give more than the sum of the single assignments', () => {
    fc.assert(
      fc.property(
        anyAssignments,
        fc.constantFrom(...rights),
        fc.integer({ min: 1, max: 4 }),
        (assignments, right, categoryId) => {
          const separately = assignments.some((assignment) => mayDo([assignment], right, categoryId));
          expect(mayDo(assignments, right, categoryId)).toBe(separately);
        },
      ),
    );
  });
});

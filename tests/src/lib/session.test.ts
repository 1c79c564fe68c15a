import { expect, it } from 'vitest';
import { withCategory } from '../../../src/lib/categories.ts';
import { roleIn } from '../../../src/lib/session.ts';
import { readToday } from '../../../src/lib/today.ts';

it('names the role that may do most in the category in view', () => {
  const assignments = [
    { role: 'viewer', categoryId: 1 },
    { role: 'planner', categoryId: 1 },
    { role: 'category-lead', categoryId: 2 },
  ] as const;
  expect(roleIn(assignments, 1)).toBe('planner');
  expect(roleIn(assignments, 2)).toBe('category-lead');
  expect(roleIn(assignments, 3)).toBeNull();
  expect(roleIn([{ role: 'finance', categoryId: null }], 3)).toBe('finance');
});

it('keeps what a link already asks for when it adds the category', () => {
  expect(withCategory('/calendar?from=2026-11-30', 2)).toBe('/calendar?from=2026-11-30&category=2');
  expect(withCategory('/plan/3?category=1', 2)).toBe('/plan/3?category=2');
  expect(withCategory('/sales', null)).toBe('/sales');
});

it('reads today from the person’s own clock', () => {
  expect(readToday(new Date(2026, 11, 1, 0, 30))).toBe('2026-12-01');
  expect(readToday(new Date(2026, 11, 1, 23, 30))).toBe('2026-12-01');
});

/**
 * Who may do what: the permission table of the product, once for server and client. The server enforces it; the client only hides what it forbids.
 * `own` = in the categories that the role is held for; `all` = everywhere.
 */
export const roles = ['viewer', 'planner', 'category-lead', 'finance', 'administrator'] as const;
export type Role = (typeof roles)[number];

export const rights = [
  'see-category',
  'import-sales',
  'edit-calendar',
  'edit-targets',
  'generate-forecast',
  'override-draft',
  'submit-line',
  'adjust-submitted',
  'return-line',
  'lock-line',
  'unlock-line',
  'build-pack',
  'download-pack',
  'create-range',
  'administer',
  'read-audit-own',
  'read-audit-category',
  'read-audit-all',
] as const;
export type Right = (typeof rights)[number];

export type Reach = 'own' | 'all';

const nothing = {} as const;

export const permissionTable: Readonly<Record<Role, Readonly<Partial<Record<Right, Reach>>>>> = {
  viewer: { 'see-category': 'own', 'download-pack': 'own' },
  planner: {
    'see-category': 'own',
    'import-sales': 'own',
    'edit-calendar': 'own',
    'edit-targets': 'own',
    'generate-forecast': 'own',
    'override-draft': 'own',
    'submit-line': 'own',
    'download-pack': 'own',
    'create-range': 'own',
    'read-audit-own': 'all',
  },
  'category-lead': {
    'see-category': 'own',
    'import-sales': 'own',
    'edit-calendar': 'own',
    'edit-targets': 'own',
    'generate-forecast': 'own',
    'override-draft': 'own',
    'submit-line': 'own',
    'adjust-submitted': 'own',
    'return-line': 'own',
    'lock-line': 'own',
    'unlock-line': 'own',
    'build-pack': 'own',
    'download-pack': 'own',
    'create-range': 'own',
    'read-audit-category': 'own',
  },
  finance: {
    'see-category': 'all',
    'edit-targets': 'all',
    'build-pack': 'all',
    'download-pack': 'all',
    'read-audit-all': 'all',
  },
  administrator: { 'see-category': 'all', 'create-range': 'all', administer: 'all', 'read-audit-all': 'all' },
};

/** One role held for one category, or for all of them (`categoryId` null). */
export interface Assignment {
  role: Role;
  categoryId: number | null;
}

/**
 * Categories in which the assignments give a right: 'all', or a list of ids (maybe empty).
 * A right of reach `own` counts where the role is held; of reach `all` everywhere.
 */
export function reachOf(assignments: readonly Assignment[], right: Right): 'all' | number[] {
  const ids = new Set<number>();
  for (const { role, categoryId } of assignments) {
    const reach = (permissionTable[role] ?? nothing)[right];
    if (reach === undefined) continue;
    if (reach === 'all' || categoryId === null) return 'all';
    ids.add(categoryId);
  }
  return [...ids].sort((a, b) => a - b);
}

/** Whether the right is held for the category; `null` asks whether it is held anywhere. */
export function mayDo(assignments: readonly Assignment[], right: Right, categoryId: number | null): boolean {
  const reach = reachOf(assignments, right);
  if (reach === 'all') return true;
  return categoryId === null ? reach.length > 0 : reach.includes(categoryId);
}

import { useTranslation } from 'react-i18next';
import { type Assignment, permissionTable, type Role, roles } from '../../../../shared/domain/roles.ts';
import { Button } from '../../../components/Button.tsx';
import { useCategories } from '../../../lib/categories.ts';

/** Whether a role reaches everywhere by itself, so that no category is asked for. */
function isEverywhere(role: Role): boolean {
  return permissionTable[role]['see-category'] === 'all';
}

/** Roles, each for one category or for all of them. */
export function AssignmentsField({
  assignments,
  onChange,
  error,
}: {
  assignments: Assignment[];
  onChange: (assignments: Assignment[]) => void;
  error?: string;
}) {
  const { t } = useTranslation('settings');
  const { categories } = useCategories();
  const set = (at: number, change: Partial<Assignment>) =>
    onChange(assignments.map((assignment, index) => (index === at ? { ...assignment, ...change } : assignment)));
  return (
    <fieldset>
      <legend className="mb-1.5 text-small font-[560]">{t('people.rolesLabel')}</legend>
      <div className="grid gap-2">
        {assignments.map((assignment, index) => (
          <div key={index} className="grid grid-cols-[160px_auto_1fr_auto] items-center gap-3">
            <select
              className="blank"
              aria-label={`${t('people.role')} ${index + 1}`}
              value={assignment.role}
              onChange={(event) => {
                const role = event.target.value as Role;
                set(index, isEverywhere(role) ? { role, categoryId: null } : { role });
              }}
            >
              {roles.map((role) => (
                <option key={role} value={role}>
                  {t(`common:role.${role}`)}
                </option>
              ))}
            </select>
            <span className="text-soft">{t('people.category')}</span>
            <select
              className="blank"
              aria-label={`${t('people.category')} ${index + 1}`}
              disabled={isEverywhere(assignment.role)}
              value={assignment.categoryId ?? ''}
              onChange={(event) =>
                set(index, { categoryId: event.target.value === '' ? null : Number(event.target.value) })
              }
            >
              <option value="">{t('people.allCategories')}</option>
              {categories.map(({ id, name }) => (
                <option key={id} value={id}>
                  {name}
                </option>
              ))}
            </select>
            <Button
              variant="text"
              aria-label={t('people.removeRoleNamed', { n: index + 1 })}
              onClick={() => onChange(assignments.filter((_, other) => other !== index))}
            >
              {t('people.removeRole')}
            </Button>
          </div>
        ))}
      </div>
      <Button
        variant="text"
        onClick={() => onChange([...assignments, { role: 'planner', categoryId: categories[0]?.id ?? null }])}
      >
        {t('people.addRole')}
      </Button>
      {error && <p className="text-small font-medium text-madder">{error}</p>}
    </fieldset>
  );
}

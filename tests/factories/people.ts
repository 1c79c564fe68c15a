import type { Assignment } from '../../shared/domain/roles.ts';
import type { Actor } from '../../server/lib/authorise.ts';
import type { Database } from '../../server/lib/database.ts';

let drawn = 0;

/** A person with rights, without a password. Roles are given as `{ role, categoryId }`; default: planner everywhere. */
export async function makePerson(
  database: Database,
  given: { name?: string; assignments?: Assignment[]; isDataSteward?: boolean; passwordHash?: string } = {},
): Promise<Actor> {
  drawn += 1;
  const name = given.name ?? `Person ${drawn}`;
  const email = `${name.toLowerCase().replace(/[^a-z0-9]+/g, '.')}.${drawn}@ostrel.example`;
  const assignments = given.assignments ?? [{ role: 'planner', categoryId: null }];
  const { rows } = await database.pool.query<{ id: number }>(
    'insert into person (name, email, password_hash) values ($1, $2, $3) returning id',
    [name, email, given.passwordHash ?? null],
  );
  const id = rows[0]?.id ?? 0;
  for (const { role, categoryId } of assignments) {
    await database.pool.query('insert into category_assignment (person_id, category_id, role) values ($1, $2, $3)', [
      id,
      categoryId,
      role,
    ]);
  }
  const isDataSteward = given.isDataSteward ?? false;
  if (isDataSteward) {
    await database.pool.query(`insert into person_right (person_id, name) values ($1, 'data-steward')`, [id]);
  }
  return { id, name, email, assignments, isDataSteward };
}

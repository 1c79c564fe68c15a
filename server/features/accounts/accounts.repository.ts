import type { Assignment } from '../../../shared/domain/roles.ts';
import type { Actor } from '../../lib/authorise.ts';
import { execute, selectRow, selectRows, type Tx } from '../../lib/database.ts';

export interface StoredPerson extends Actor {
  isActive: boolean;
  hasAccepted: boolean;
  lastSeenAt: Date | null;
}

const personColumns = `p.id, p.name, p.email, p.is_active as "isActive", p.password_hash is not null as "hasAccepted", p.last_seen_at as "lastSeenAt",
  exists (select from person_right r where r.person_id = p.id and r.name = 'data-steward') as "isDataSteward",
  coalesce((select json_agg(json_build_object('role', a.role, 'categoryId', a.category_id) order by a.role, a.category_id)
            from category_assignment a where a.person_id = p.id), '[]') as assignments`;

export function findPerson(tx: Tx, id: number): Promise<StoredPerson | null> {
  return selectRow<StoredPerson>(tx, `select ${personColumns} from person p where p.id = $id`, { id });
}

export function listPeople(tx: Tx): Promise<StoredPerson[]> {
  return selectRows<StoredPerson>(tx, `select ${personColumns} from person p order by lower(p.name), p.id`);
}

export async function countPeople(tx: Tx): Promise<number> {
  const row = await selectRow<{ count: number }>(tx, 'select count(*)::int as count from person');
  return row?.count ?? 0;
}

export function findCredentials(
  tx: Tx,
  email: string,
): Promise<{ id: number; passwordHash: string | null; isActive: boolean } | null> {
  return selectRow(
    tx,
    `select id, password_hash as "passwordHash", is_active as "isActive" from person where lower(email) = lower($email)`,
    { email },
  );
}

export async function isEmailTaken(tx: Tx, email: string, exceptId: number | null): Promise<boolean> {
  const row = await selectRow(
    tx,
    'select id from person where lower(email) = lower($email) and id is distinct from $exceptId',
    {
      email,
      exceptId,
    },
  );
  return row !== null;
}

export async function insertPerson(
  tx: Tx,
  person: { name: string; email: string; passwordHash: string | null },
): Promise<number> {
  const [row] = await selectRows<{ id: number }>(
    tx,
    'insert into person (name, email, password_hash) values ($name, $email, $passwordHash) returning id',
    person,
  );
  if (!row) throw new Error('person was not inserted');
  return row.id;
}

export async function updatePerson(
  tx: Tx,
  person: { id: number; name: string; email: string; passwordHash: string },
): Promise<void> {
  await execute(
    tx,
    'update person set name = $name, email = $email, password_hash = $passwordHash where id = $id',
    person,
  );
}

export async function setActive(tx: Tx, id: number, isActive: boolean): Promise<void> {
  await execute(tx, 'update person set is_active = $isActive where id = $id', { id, isActive });
}

export async function touchLastSeen(tx: Tx, id: number): Promise<void> {
  await execute(tx, 'update person set last_seen_at = now() where id = $id', { id });
}

export async function replaceAssignments(tx: Tx, personId: number, assignments: readonly Assignment[]): Promise<void> {
  await execute(tx, 'delete from category_assignment where person_id = $personId', { personId });
  await execute(
    tx,
    `insert into category_assignment (person_id, category_id, role)
     select distinct $personId::int, a."categoryId", a.role from json_to_recordset($assignments::json) as a("categoryId" int, role text)`,
    { personId, assignments: JSON.stringify(assignments) },
  );
}

export async function setDataSteward(tx: Tx, personId: number, isDataSteward: boolean): Promise<void> {
  await execute(
    tx,
    isDataSteward
      ? `insert into person_right (person_id, name) values ($personId, 'data-steward') on conflict do nothing`
      : `delete from person_right where person_id = $personId and name = 'data-steward'`,
    { personId },
  );
}

export async function dropSessions(tx: Tx, personId: number): Promise<void> {
  await execute(tx, 'delete from session where user_id = $personId', { personId });
}

export interface StoredInvitation {
  id: number;
  kind: 'first-administrator' | 'invitation';
  personId: number | null;
  name: string | null;
  email: string | null;
}

/** An invitation that is unspent and in time; locked until the transaction ends. */
export function findOpenInvitation(tx: Tx, tokenHash: string): Promise<StoredInvitation | null> {
  return selectRow<StoredInvitation>(
    tx,
    `select i.id, i.kind, i.person_id as "personId", p.name, p.email
     from invitation i left join person p on p.id = i.person_id
     where i.token_hash = $tokenHash and i.used_at is null and i.expires_at > now() and (p.id is null or p.is_active)
     for update of i`,
    { tokenHash },
  );
}

export async function insertInvitation(
  tx: Tx,
  invitation: { tokenHash: string; kind: StoredInvitation['kind']; personId: number | null; expiresAt: Date },
): Promise<void> {
  // A newer link makes the earlier ones of the same person useless.
  await execute(
    tx,
    `update invitation set expires_at = now() where used_at is null and kind = $kind and person_id is not distinct from $personId`,
    { kind: invitation.kind, personId: invitation.personId },
  );
  await execute(
    tx,
    `insert into invitation (token_hash, kind, person_id, expires_at) values ($tokenHash, $kind, $personId, $expiresAt)`,
    { ...invitation },
  );
}

export async function spendInvitation(tx: Tx, id: number): Promise<void> {
  await execute(tx, 'update invitation set used_at = now() where id = $id', { id });
}

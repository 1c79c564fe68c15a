import { hash, verify } from '@node-rs/argon2';
import type { AcceptInvitation, InvitationInfo, Person, SignIn } from '../../../shared/contracts/accounts.ts';
import type { ChangePerson, InvitePerson, PersonRow } from '../../../shared/contracts/settings.ts';
import type { Assignment } from '../../../shared/domain/roles.ts';
import { writeAudit } from '../../lib/audit.ts';
import { demandRight, type Actor } from '../../lib/authorise.ts';
import { inTransaction, type Database, type Tx } from '../../lib/database.ts';
import { ProblemError } from '../../lib/problem.ts';
import * as repository from './accounts.repository.ts';
import { drawToken, hashToken } from './sessions.ts';

/** argon2id, 19 MiB, two passes, one lane (OWASP Password Storage Cheat Sheet). */
const hashing = { memoryCost: 19_456, timeCost: 2, parallelism: 1 } as const;
const invitationLifetimeMs = 7 * 86_400_000;

let dummyHash: Promise<string> | null = null;

/** The signed-in person's id if the password is right. An unknown address takes as long and gets the same answer. */
export async function checkCredentials(database: Database, { email, password }: SignIn): Promise<number> {
  const stored = await inTransaction(database, (tx) => repository.findCredentials(tx, email));
  dummyHash ??= hash(drawToken(), hashing);
  const isRight = await verify(stored?.passwordHash ?? (await dummyHash), password);
  if (!stored?.passwordHash || !stored.isActive || !isRight) {
    throw new ProblemError(
      'wrong-credentials',
      'The e-mail address or the password isn’t right. Check both and try again; if you have forgotten the password, ask your administrator for a new link.',
    );
  }
  await inTransaction(database, (tx) => repository.touchLastSeen(tx, stored.id));
  return stored.id;
}

/** The person as an actor; null if unknown or disabled. */
export async function loadActor(tx: Tx, id: number): Promise<Actor | null> {
  const person = await repository.findPerson(tx, id);
  return person?.isActive ? person : null;
}

export function toPerson({ id, name, email, assignments, isDataSteward }: Actor): Person {
  return { id, name, email, assignments: [...assignments], isDataSteward };
}

function toRow(person: repository.StoredPerson): PersonRow {
  return {
    ...toPerson(person),
    isActive: person.isActive,
    hasAccepted: person.hasAccepted,
    lastSeenAt: person.lastSeenAt?.toISOString() ?? null,
  };
}

export function readInvitation(database: Database, token: string): Promise<InvitationInfo> {
  return inTransaction(database, async (tx) => {
    const { kind, name, email } = await demandInvitation(tx, token);
    return { kind, name, email };
  });
}

/** Spends the link: sets name, address and password; the first administrator is created by it. Returns the person's id. */
export async function acceptInvitation(database: Database, token: string, answer: AcceptInvitation): Promise<number> {
  const passwordHash = await hash(answer.password, hashing);
  return inTransaction(database, async (tx) => {
    const invitation = await demandInvitation(tx, token);
    if (await repository.isEmailTaken(tx, answer.email, invitation.personId)) {
      throw new ProblemError('already-exists', 'Somebody else has this e-mail address here. Use another one.');
    }
    const { name, email } = answer;
    let id = invitation.personId;
    if (id === null) {
      if ((await repository.countPeople(tx)) > 0) throw spentLink();
      id = await repository.insertPerson(tx, { name, email, passwordHash });
      await repository.replaceAssignments(tx, id, [{ role: 'administrator', categoryId: null }]);
    } else {
      await repository.updatePerson(tx, { id, name, email, passwordHash });
      await repository.dropSessions(tx, id);
    }
    await repository.spendInvitation(tx, invitation.id);
    const actor = await loadActor(tx, id);
    await writeAudit(tx, { actor, action: 'accept-invitation', subject: `person:${id}` });
    return id;
  });
}

async function demandInvitation(tx: Tx, token: string): Promise<repository.StoredInvitation> {
  const invitation = await repository.findOpenInvitation(tx, hashToken(token));
  if (!invitation) throw spentLink();
  return invitation;
}

function spentLink(): ProblemError {
  return new ProblemError('link-spent', 'It was used already or is too old. Ask your administrator for a new one.');
}

/** A fresh token for the first administrator's single-use link (`/invitation/<token>`); null once there are people. Earlier ones stop working. */
export function offerFirstAdministrator(database: Database): Promise<string | null> {
  return inTransaction(database, async (tx) => {
    if ((await repository.countPeople(tx)) > 0) return null;
    const token = drawToken();
    await repository.insertInvitation(tx, {
      tokenHash: hashToken(token),
      kind: 'first-administrator',
      personId: null,
      expiresAt: new Date(Date.now() + invitationLifetimeMs),
    });
    return token;
  });
}

export function listPeople(database: Database, actor: Actor): Promise<PersonRow[]> {
  demandRight(actor, 'administer', null);
  return inTransaction(database, async (tx) => (await repository.listPeople(tx)).map(toRow));
}

/** Adds a person who has yet to choose a password, and returns the path of the link, which is shown once. */
export function invitePerson(
  database: Database,
  actor: Actor,
  invite: InvitePerson,
): Promise<{ person: PersonRow; path: string; expiresAt: Date }> {
  demandRight(actor, 'administer', null);
  return inTransaction(database, async (tx) => {
    if (await repository.isEmailTaken(tx, invite.email, null)) {
      throw new ProblemError(
        'already-exists',
        'There is a person with this e-mail address. Change that person’s roles instead.',
      );
    }
    const id = await repository.insertPerson(tx, { name: invite.name, email: invite.email, passwordHash: null });
    await repository.replaceAssignments(tx, id, invite.assignments);
    await repository.setDataSteward(tx, id, invite.isDataSteward);
    const token = drawToken();
    const expiresAt = new Date(Date.now() + invitationLifetimeMs);
    await repository.insertInvitation(tx, { tokenHash: hashToken(token), kind: 'invitation', personId: id, expiresAt });
    await writeAudit(tx, { actor, action: 'invite-person', subject: `person:${id}`, new: invite });
    const person = await demandPerson(tx, id);
    return { person: toRow(person), path: `/invitation/${token}`, expiresAt };
  });
}

/** A new link for somebody who lost the first one or the password. */
export function renewInvitation(
  database: Database,
  actor: Actor,
  personId: number,
): Promise<{ person: PersonRow; path: string; expiresAt: Date }> {
  demandRight(actor, 'administer', null);
  return inTransaction(database, async (tx) => {
    const person = await demandPerson(tx, personId);
    const token = drawToken();
    const expiresAt = new Date(Date.now() + invitationLifetimeMs);
    await repository.insertInvitation(tx, { tokenHash: hashToken(token), kind: 'invitation', personId, expiresAt });
    await writeAudit(tx, { actor, action: 'renew-invitation', subject: `person:${personId}` });
    return { person: toRow(person), path: `/invitation/${token}`, expiresAt };
  });
}

/** Changes roles, rights or whether the person may sign in; their open sessions end, so that new rights count at once. */
export function changePerson(database: Database, actor: Actor, id: number, change: ChangePerson): Promise<PersonRow> {
  demandRight(actor, 'administer', null);
  return inTransaction(database, async (tx) => {
    const before = toRow(await demandPerson(tx, id));
    if (
      id === actor.id &&
      (change.isActive === false || (change.assignments && !isAdministrator(change.assignments)))
    ) {
      throw new ProblemError('wrong-state', 'You can’t take your own administration away. Ask another administrator.');
    }
    if (change.assignments) await repository.replaceAssignments(tx, id, change.assignments);
    if (change.isDataSteward !== undefined) await repository.setDataSteward(tx, id, change.isDataSteward);
    if (change.isActive !== undefined) await repository.setActive(tx, id, change.isActive);
    if (id !== actor.id) await repository.dropSessions(tx, id);
    const after = toRow(await demandPerson(tx, id));
    await writeAudit(tx, { actor, action: 'change-person', subject: `person:${id}`, old: before, new: after });
    return after;
  });
}

function isAdministrator(assignments: readonly Assignment[]): boolean {
  return assignments.some(({ role }) => role === 'administrator');
}

async function demandPerson(tx: Tx, id: number): Promise<repository.StoredPerson> {
  const person = await repository.findPerson(tx, id);
  if (!person) throw new ProblemError('not-found', 'There is no such person.');
  return person;
}

/** A person with a password, without an invitation: the demo company's people. */
export async function createPersonWithPassword(
  tx: Tx,
  person: { name: string; email: string; password: string; assignments: readonly Assignment[]; isDataSteward: boolean },
): Promise<Actor> {
  const { name, email } = person;
  const id = await repository.insertPerson(tx, { name, email, passwordHash: await hash(person.password, hashing) });
  await repository.replaceAssignments(tx, id, person.assignments);
  await repository.setDataSteward(tx, id, person.isDataSteward);
  return demandPerson(tx, id);
}

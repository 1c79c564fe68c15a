import { z } from 'zod';
import { roles } from '../domain/roles.ts';
import { Id, Name } from './primitives.ts';

export const Assignment = z.object({ role: z.enum(roles), categoryId: Id.nullable() });

export const Person = z.object({
  id: Id,
  name: z.string(),
  email: z.string(),
  assignments: z.array(Assignment),
  isDataSteward: z.boolean(),
});
export type Person = z.infer<typeof Person>;

export const Session = z.object({ person: Person, isDemo: z.boolean() });
export type Session = z.infer<typeof Session>;

export const SignIn = z.object({ email: z.string().trim().min(1).max(320), password: z.string().min(1).max(128) });
export type SignIn = z.infer<typeof SignIn>;

/** At least 15 characters, at most 128; no rules on their composition. */
export const NewPassword = z
  .string()
  .min(15, { error: 'must have at least 15 characters' })
  .max(128, { error: 'must have at most 128 characters' });

export const InvitationInfo = z.object({
  kind: z.enum(['first-administrator', 'invitation']),
  name: z.string().nullable(),
  email: z.string().nullable(),
});
export type InvitationInfo = z.infer<typeof InvitationInfo>;

export const AcceptInvitation = z.object({ name: Name, email: z.email(), password: NewPassword });
export type AcceptInvitation = z.infer<typeof AcceptInvitation>;

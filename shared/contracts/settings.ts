import { z } from 'zod';
import { Assignment, Person } from './accounts.ts';
import { Id, Instant, Name } from './primitives.ts';

export const Reason = z.object({ id: Id, name: z.string(), isActive: z.boolean() });
export type Reason = z.infer<typeof Reason>;
export const ReasonList = z.object({
  reasons: z.array(Reason),
  /** Relative change of a cell past which a note is asked for, e.g. 0.25. */
  noteThreshold: z.number(),
});
export type ReasonList = z.infer<typeof ReasonList>;

export const Settings = z.object({
  companyName: z.string(),
  /** Country of the public holidays, ISO 3166-1 alpha-2; empty = none. */
  holidayCountry: z.string().regex(/^([A-Z]{2})?$/),
  currency: z.string().regex(/^[A-Z]{3}$/, { error: 'must be a three-letter code such as EUR' }),
  firstWeekday: z.number().int().min(0).max(6).nullable(),
  horizonWeeks: z.number().int().min(4).max(26),
  noteThreshold: z.number().min(0).max(10),
  /** Relative move of the model past which an override is due another look. */
  lookThreshold: z.number().min(0).max(10),
});
export type Settings = z.infer<typeof Settings>;
export const ChangeSettings = Settings.omit({ firstWeekday: true }).partial();
export type ChangeSettings = z.infer<typeof ChangeSettings>;

export const PersonRow = Person.extend({
  isActive: z.boolean(),
  hasAccepted: z.boolean(),
  lastSeenAt: Instant.nullable(),
});
export type PersonRow = z.infer<typeof PersonRow>;
export const PeopleList = z.object({ people: z.array(PersonRow) });
export type PeopleList = z.infer<typeof PeopleList>;

export const InvitePerson = z.object({
  name: Name,
  email: z.email(),
  assignments: z.array(Assignment).min(1),
  isDataSteward: z.boolean(),
});
export type InvitePerson = z.infer<typeof InvitePerson>;
/** The link is shown once; only its hash is stored. */
export const InvitedPerson = z.object({ person: PersonRow, link: z.string(), expiresAt: Instant });
export type InvitedPerson = z.infer<typeof InvitedPerson>;
export const ChangePerson = z.object({
  assignments: z.array(Assignment).optional(),
  isDataSteward: z.boolean().optional(),
  isActive: z.boolean().optional(),
});
export type ChangePerson = z.infer<typeof ChangePerson>;

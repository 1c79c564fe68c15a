import { createHash, randomBytes } from 'node:crypto';
import { NodePostgresAdapter } from '@lucia-auth/adapter-postgresql';
import { Lucia, TimeSpan } from 'lucia';
import type { Database } from '../../lib/database.ts';

declare module 'lucia' {
  interface Register {
    Lucia: Lucia;
    UserId: number;
  }
}

const lifetime = new TimeSpan(14, 'd');
export const sessionLifetimeMs = lifetime.milliseconds();

/** SHA-256 of a random token, in hex: what is stored where the token itself must not be. */
export function hashToken(token: string): string {
  return createHash('sha256').update(token).digest('hex');
}

export function drawToken(): string {
  return randomBytes(32).toString('base64url');
}

export interface Sessions {
  /** Opens a session and returns the token for the cookie. */
  open(personId: number): Promise<string>;
  /** The person of a token; null if the session is unknown or over. `isFresh` says that its end was moved and the cookie should be sent anew. */
  read(token: string): Promise<{ sessionId: string; personId: number; isFresh: boolean } | null>;
  close(sessionId: string): Promise<void>;
}

/** Sign-in sessions kept by lucia, which stores ids as given: so its id is the hash of the token, and the token lives in the cookie alone. */
export function openSessions(database: Database): Sessions {
  const lucia = new Lucia(new NodePostgresAdapter(database.pool, { user: 'person', session: 'session' }), {
    sessionExpiresIn: lifetime,
  });
  return {
    open: async (personId) => {
      const token = drawToken();
      await lucia.createSession(personId, {}, { sessionId: hashToken(token) });
      return token;
    },
    read: async (token) => {
      const { session } = await lucia.validateSession(hashToken(token));
      return session ? { sessionId: session.id, personId: session.userId, isFresh: session.fresh } : null;
    },
    close: (sessionId) => lucia.invalidateSession(sessionId),
  };
}

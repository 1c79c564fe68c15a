import { queryOptions, useMutation, useQueryClient } from '@tanstack/react-query';
import { type AcceptInvitation, InvitationInfo, Session, type SignIn } from '../../../shared/contracts/accounts.ts';
import { request } from '../../lib/api.ts';
import { sessionQuery } from '../../lib/session.ts';

export const invitationQuery = (token: string) =>
  queryOptions({
    queryKey: ['invitation', token],
    queryFn: ({ signal }) => request(InvitationInfo, `/invitations/${encodeURIComponent(token)}`, { signal }),
    retry: false,
    staleTime: Infinity,
  });

function useEntry<Input>(send: (input: Input) => Promise<Session>) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: send,
    onSuccess: (session) => {
      // What another person was shown is forgotten; the invitation in view is spent and must not be asked for again.
      client.removeQueries({ predicate: ({ queryKey }) => queryKey[0] !== 'invitation' });
      client.setQueryData(sessionQuery.queryKey, session);
    },
  });
}

export function useSignIn() {
  return useEntry((body: SignIn) => request(Session, '/session', { method: 'POST', body }));
}

export function useAcceptInvitation(token: string) {
  return useEntry((body: AcceptInvitation) =>
    request(Session, `/invitations/${encodeURIComponent(token)}`, { method: 'POST', body }),
  );
}

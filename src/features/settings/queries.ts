import { queryOptions, useMutation, useQueryClient } from '@tanstack/react-query';
import { Category } from '../../../shared/contracts/lines.ts';
import { Named } from '../../../shared/contracts/primitives.ts';
import {
  type ChangePerson,
  type ChangeSettings,
  InvitedPerson,
  type InvitePerson,
  PeopleList,
  PersonRow,
  Settings,
} from '../../../shared/contracts/settings.ts';
import { request } from '../../lib/api.ts';
import { settingsQuery } from '../../lib/settings.ts';

export const peopleQuery = queryOptions({
  queryKey: ['people'],
  queryFn: ({ signal }) => request(PeopleList, '/people', { signal }),
});

export function useChangeSettings() {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (body: ChangeSettings) => request(Settings, '/settings', { method: 'PATCH', body }),
    onSuccess: (settings) => {
      client.setQueryData(settingsQuery.queryKey, settings);
      for (const key of ['calendar', 'plan', 'waiting']) void client.invalidateQueries({ queryKey: [key] });
    },
  });
}

function usePeopleChange<Input, Answer>(send: (input: Input) => Promise<Answer>) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: send,
    onSuccess: () => {
      for (const key of ['people', 'session', 'waiting']) void client.invalidateQueries({ queryKey: [key] });
    },
  });
}

export const useInvitePerson = () =>
  usePeopleChange((body: InvitePerson) => request(InvitedPerson, '/people', { method: 'POST', body }));

/** A new one-time link for a person who hasn't used theirs, or forgot the password. */
export const useRenewLink = () =>
  usePeopleChange((personId: number) =>
    request(InvitedPerson, `/people/${personId}/link`, { method: 'POST', body: {} }),
  );

export const useChangePerson = () =>
  usePeopleChange(({ id, change }: { id: number; change: ChangePerson }) =>
    request(PersonRow, `/people/${id}`, { method: 'PATCH', body: change }),
  );

function useRangeChange<Input, Answer>(send: (input: Input) => Promise<Answer>) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: send,
    onSuccess: () => {
      for (const key of ['categories', 'waiting', 'plan', 'calendar']) {
        void client.invalidateQueries({ queryKey: [key] });
      }
    },
  });
}

export const useCreateCategory = () =>
  useRangeChange((name: string) => request(Category, '/categories', { method: 'POST', body: { name } }));

export const useCreateLine = () =>
  useRangeChange((body: { categoryId: number; name: string }) => request(Named, '/lines', { method: 'POST', body }));

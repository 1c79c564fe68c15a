import { useQuery } from '@tanstack/react-query';
import { useState } from 'react';
import { useTranslation } from 'react-i18next';
import type { InvitedPerson, PersonRow } from '../../../../shared/contracts/settings.ts';
import { Button } from '../../../components/Button.tsx';
import { Dialog } from '../../../components/Dialog.tsx';
import { PageHead } from '../../../components/Page.tsx';
import { ProblemNote, QueryStates } from '../../../components/states.tsx';
import { showToast } from '../../../components/toasts.ts';
import { describeError } from '../../../lib/api.ts';
import { peopleQuery, useChangePerson, useRenewLink } from '../queries.ts';
import { ChangeRolesDialog, InviteDialog } from './PersonDialogs.tsx';
import { LinkDialog } from './LinkDialog.tsx';
import { PeopleTable } from './PeopleTable.tsx';

type Question =
  | { kind: 'invite' }
  | { kind: 'roles'; person: PersonRow }
  | { kind: 'disable'; person: PersonRow }
  | { kind: 'link'; invited: InvitedPerson };

export function PeopleSettings() {
  const { t } = useTranslation('settings');
  const people = useQuery(peopleQuery);
  const change = useChangePerson();
  const renew = useRenewLink();
  const [question, setQuestion] = useState<Question | null>(null);
  const close = () => setQuestion(null);

  const setActive = async (person: PersonRow, isActive: boolean) => {
    try {
      await change.mutateAsync({ id: person.id, change: { isActive } });
      close();
      showToast({
        tone: 'done',
        text: t(isActive ? 'people.enabledDone' : 'people.disabledDone', { name: person.name }),
      });
    } catch (error) {
      if (isActive) showToast({ tone: 'problem', text: describeError(error).detail });
    }
  };
  const renewLink = async (person: PersonRow) => {
    try {
      setQuestion({ kind: 'link', invited: await renew.mutateAsync(person.id) });
    } catch (error) {
      showToast({ tone: 'problem', text: describeError(error).detail });
    }
  };

  return (
    <>
      <PageHead
        title={t('part.people')}
        lead={t('people.lead')}
        actions={<Button onClick={() => setQuestion({ kind: 'invite' })}>{t('people.invite')}</Button>}
      />
      <div className="mt-4">
        <QueryStates query={people}>
          {(answer) => (
            <PeopleTable
              people={answer.people}
              onChangeRoles={(person) => setQuestion({ kind: 'roles', person })}
              onDisable={(person) => {
                change.reset();
                setQuestion({ kind: 'disable', person });
              }}
              onEnable={(person) => void setActive(person, true)}
              onRenewLink={(person) => void renewLink(person)}
            />
          )}
        </QueryStates>
      </div>
      {question?.kind === 'invite' && (
        <InviteDialog onClose={close} onInvited={(invited) => setQuestion({ kind: 'link', invited })} />
      )}
      {question?.kind === 'roles' && <ChangeRolesDialog person={question.person} onClose={close} />}
      {question?.kind === 'link' && <LinkDialog invited={question.invited} onClose={close} />}
      {question?.kind === 'disable' && (
        <Dialog
          open
          onClose={close}
          title={t('people.disableTitle', { name: question.person.name })}
          lead={t('people.disableLead', { name: question.person.name })}
          footer={
            <>
              <Button variant="text" onClick={close}>
                {t('common:cancel')}
              </Button>
              <Button disabled={change.isPending} onClick={() => void setActive(question.person, false)}>
                {t('people.disable')}
              </Button>
            </>
          }
        >
          <ProblemNote error={change.error} />
        </Dialog>
      )}
    </>
  );
}

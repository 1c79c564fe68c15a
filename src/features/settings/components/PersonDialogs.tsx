import { useState } from 'react';
import { useTranslation } from 'react-i18next';
import { type InvitedPerson, InvitePerson, type PersonRow } from '../../../../shared/contracts/settings.ts';
import type { Assignment } from '../../../../shared/domain/roles.ts';
import { Button } from '../../../components/Button.tsx';
import { Dialog } from '../../../components/Dialog.tsx';
import { Checkbox, TextField } from '../../../components/fields.tsx';
import { ProblemNote } from '../../../components/states.tsx';
import { showToast } from '../../../components/toasts.ts';
import { useCategories } from '../../../lib/categories.ts';
import { useChangePerson, useInvitePerson } from '../queries.ts';
import { AssignmentsField } from './AssignmentsField.tsx';

export function InviteDialog({
  onClose,
  onInvited,
}: {
  onClose: () => void;
  onInvited: (invited: InvitedPerson) => void;
}) {
  const { t } = useTranslation('settings');
  const { categories } = useCategories();
  const invite = useInvitePerson();
  const [name, setName] = useState('');
  const [email, setEmail] = useState('');
  const [isDataSteward, setDataSteward] = useState(false);
  const [assignments, setAssignments] = useState<Assignment[]>([
    { role: 'planner', categoryId: categories[0]?.id ?? null },
  ]);
  const [isTried, setTried] = useState(false);
  const isWrong = {
    name: !InvitePerson.shape.name.safeParse(name).success,
    email: !InvitePerson.shape.email.safeParse(email.trim()).success,
    assignments: assignments.length === 0,
  };
  const submit = async () => {
    setTried(true);
    if (isWrong.name || isWrong.email || isWrong.assignments) return;
    try {
      onInvited(await invite.mutateAsync({ name: name.trim(), email: email.trim(), assignments, isDataSteward }));
    } catch {
      // Shown above the buttons.
    }
  };
  return (
    <Dialog
      open
      onClose={onClose}
      title={t('people.inviteTitle')}
      lead={t('people.inviteLead')}
      footer={
        <>
          <Button variant="text" onClick={onClose}>
            {t('common:cancel')}
          </Button>
          <Button disabled={invite.isPending} onClick={() => void submit()}>
            {t('people.submitInvite')}
          </Button>
        </>
      }
    >
      <div className="grid gap-4">
        <TextField
          label={t('people.nameLabel')}
          autoFocus
          value={name}
          error={isTried && isWrong.name ? t('people.nameMissing') : undefined}
          onChange={(event) => setName(event.target.value)}
        />
        <TextField
          label={t('people.email')}
          type="email"
          value={email}
          error={isTried && isWrong.email ? t('people.emailWrong') : undefined}
          onChange={(event) => setEmail(event.target.value)}
        />
        <AssignmentsField
          assignments={assignments}
          onChange={setAssignments}
          error={isTried && isWrong.assignments ? t('people.rolesMissing') : undefined}
        />
        <Checkbox
          label={t('people.steward')}
          hint={t('people.stewardHint')}
          checked={isDataSteward}
          onChange={(event) => setDataSteward(event.target.checked)}
        />
        <ProblemNote error={invite.error} />
      </div>
    </Dialog>
  );
}

export function ChangeRolesDialog({ person, onClose }: { person: PersonRow; onClose: () => void }) {
  const { t } = useTranslation('settings');
  const change = useChangePerson();
  const [assignments, setAssignments] = useState<Assignment[]>(person.assignments);
  const [isDataSteward, setDataSteward] = useState(person.isDataSteward);
  const submit = async () => {
    try {
      await change.mutateAsync({ id: person.id, change: { assignments, isDataSteward } });
      showToast({ tone: 'done', text: t('people.changedDone', { name: person.name }) });
      onClose();
    } catch {
      // Shown above the buttons.
    }
  };
  return (
    <Dialog
      open
      onClose={onClose}
      title={t('people.changeNamed', { name: person.name })}
      footer={
        <>
          <Button variant="text" onClick={onClose}>
            {t('common:cancel')}
          </Button>
          <Button disabled={change.isPending || assignments.length === 0} onClick={() => void submit()}>
            {t('people.submitChange')}
          </Button>
        </>
      }
    >
      <div className="grid gap-4">
        <AssignmentsField
          assignments={assignments}
          onChange={setAssignments}
          error={assignments.length === 0 ? t('people.rolesMissing') : undefined}
        />
        <Checkbox
          label={t('people.steward')}
          hint={t('people.stewardHint')}
          checked={isDataSteward}
          onChange={(event) => setDataSteward(event.target.checked)}
        />
        <ProblemNote error={change.error} />
      </div>
    </Dialog>
  );
}

import { useQuery } from '@tanstack/react-query';
import { useState } from 'react';
import { useForm } from 'react-hook-form';
import { useTranslation } from 'react-i18next';
import { useNavigate, useParams } from 'react-router-dom';
import { AcceptInvitation, type InvitationInfo } from '../../../../shared/contracts/accounts.ts';
import { ActLink, Button } from '../../../components/Button.tsx';
import { Checkbox, TextField } from '../../../components/fields.tsx';
import { ErrorState, LoadingState, ProblemNote } from '../../../components/states.tsx';
import { describeError } from '../../../lib/api.ts';
import { useTitle } from '../../../lib/use-title.ts';
import { ruleOf } from '../../../lib/validate.ts';
import { invitationQuery, useAcceptInvitation } from '../queries.ts';
import { Door } from './Door.tsx';

export function InvitationPage() {
  const { t } = useTranslation('accounts');
  const { token = '' } = useParams();
  const invitation = useQuery(invitationQuery(token));
  useTitle(t('invitation.title'));
  if (invitation.data) return <Acceptance token={token} info={invitation.data} />;
  if (invitation.error) {
    return (
      <Door title={describeError(invitation.error).title}>
        <div className="mt-4 grid gap-4">
          <ErrorState error={invitation.error} />
          <ActLink to="/sign-in">{t('invitation.toSignIn')}</ActLink>
        </div>
      </Door>
    );
  }
  return (
    <Door title={t('invitation.title')}>
      <LoadingState label={t('invitation.loading')} />
    </Door>
  );
}

function Acceptance({ token, info }: { token: string; info: InvitationInfo }) {
  const { t } = useTranslation('accounts');
  const navigate = useNavigate();
  const accept = useAcceptInvitation(token);
  const [isShown, setShown] = useState(false);
  const { register, handleSubmit, formState } = useForm<AcceptInvitation>({
    defaultValues: { name: info.name ?? '', email: info.email ?? '', password: '' },
  });
  const isFirst = info.kind === 'first-administrator';

  const submit = handleSubmit(async (values) => {
    try {
      await accept.mutateAsync(values);
      await navigate('/', { replace: true });
    } catch {
      // Shown beside the button.
    }
  });

  return (
    <Door
      title={t(isFirst ? 'invitation.titleFirst' : 'invitation.title')}
      lead={t(isFirst ? 'invitation.leadFirst' : 'invitation.lead')}
    >
      <form className="mt-6 grid gap-5" onSubmit={submit} noValidate>
        <TextField
          label={t('invitation.name')}
          hint={t('invitation.nameHint')}
          autoComplete="name"
          error={formState.errors.name?.message}
          {...register('name', { validate: ruleOf(AcceptInvitation.shape.name, t('invitation.nameMissing')) })}
        />
        <TextField
          label={t('invitation.email')}
          type="email"
          autoComplete="username"
          readOnly={info.email !== null}
          error={formState.errors.email?.message}
          {...register('email', { validate: ruleOf(AcceptInvitation.shape.email, t('invitation.emailWrong')) })}
        />
        <div className="grid gap-2">
          <TextField
            label={t('invitation.password')}
            hint={t('invitation.passwordHint')}
            type={isShown ? 'text' : 'password'}
            autoComplete="new-password"
            error={formState.errors.password?.message}
            {...register('password', {
              validate: ruleOf(AcceptInvitation.shape.password, t('invitation.passwordShort')),
            })}
          />
          <Checkbox
            label={t('invitation.show')}
            checked={isShown}
            onChange={(event) => setShown(event.target.checked)}
          />
        </div>
        <ProblemNote error={accept.error} />
        <div>
          <Button type="submit" className="h-10 px-7 text-lead" disabled={accept.isPending}>
            {t(accept.isPending ? 'invitation.busy' : 'invitation.submit')}
          </Button>
        </div>
      </form>
    </Door>
  );
}

import { useForm } from 'react-hook-form';
import { useTranslation } from 'react-i18next';
import { useNavigate, useSearchParams } from 'react-router-dom';
import { SignIn } from '../../../../shared/contracts/accounts.ts';
import { Button } from '../../../components/Button.tsx';
import { TextField } from '../../../components/fields.tsx';
import { ProblemNote } from '../../../components/states.tsx';
import { useTitle } from '../../../lib/use-title.ts';
import { ruleOf } from '../../../lib/validate.ts';
import { readNextPage } from '../next-page.ts';
import { useSignIn } from '../queries.ts';
import { Door } from './Door.tsx';

export function SignInPage() {
  const { t } = useTranslation('accounts');
  useTitle(t('signIn.title'));
  const navigate = useNavigate();
  const [search] = useSearchParams();
  const signIn = useSignIn();
  const { register, handleSubmit, formState, setFocus, resetField } = useForm<SignIn>({
    defaultValues: { email: '', password: '' },
  });

  const submit = handleSubmit(async (values) => {
    try {
      await signIn.mutateAsync(values);
      await navigate(readNextPage(search), { replace: true });
    } catch {
      resetField('password');
      setFocus('password');
    }
  });

  return (
    <Door title={t('signIn.title')}>
      <form className="mt-6 grid gap-6" onSubmit={submit} noValidate>
        <TextField
          label={t('signIn.email')}
          type="email"
          autoComplete="username"
          autoFocus
          error={formState.errors.email?.message}
          {...register('email', { validate: ruleOf(SignIn.shape.email, t('signIn.emailMissing')) })}
        />
        <TextField
          label={t('signIn.password')}
          type="password"
          autoComplete="current-password"
          error={formState.errors.password?.message}
          {...register('password', { validate: ruleOf(SignIn.shape.password, t('signIn.passwordMissing')) })}
        />
        <ProblemNote error={signIn.error} />
        <div>
          <Button type="submit" className="h-10 px-7 text-lead" disabled={signIn.isPending}>
            {t(signIn.isPending ? 'signIn.busy' : 'signIn.submit')}
          </Button>
        </div>
        <p className="text-small text-soft">{t('signIn.help')}</p>
      </form>
    </Door>
  );
}

import { useTranslation } from 'react-i18next';
import { isRouteErrorResponse, useRouteError } from 'react-router-dom';
import { Button } from '../components/Button.tsx';
import { Page } from '../components/Page.tsx';
import { ErrorState } from '../components/states.tsx';
import { ProblemError } from '../lib/api.ts';
import { useTitle } from '../lib/use-title.ts';

/** A page that threw; the shell around it stays. */
export function PageError() {
  const error = useRouteError();
  const { t } = useTranslation('shell');
  useTitle(t('crashed.title'));
  if (error instanceof ProblemError || isRouteErrorResponse(error)) {
    return (
      <Page>
        <ErrorState isPage error={error} onRetry={() => window.location.reload()} />
      </Page>
    );
  }
  return (
    <Page>
      <h1>{t('crashed.title')}</h1>
      <p className="mt-2 max-w-[520px] text-soft">{t('crashed.detail')}</p>
      <Button className="mt-4" onClick={() => window.location.reload()}>
        {t('crashed.reload')}
      </Button>
    </Page>
  );
}

import { useTranslation } from 'react-i18next';
import { ActLink } from '../../components/Button.tsx';
import { Page } from '../../components/Page.tsx';
import { useTitle } from '../../lib/use-title.ts';

export function Component() {
  const { t } = useTranslation('shell');
  useTitle(t('notFound.title'));
  return (
    <Page>
      <h1>{t('notFound.title')}</h1>
      <p className="mt-2 max-w-[520px] text-soft">{t('notFound.detail')}</p>
      <p className="mt-4">
        <ActLink to="/">{t('notFound.toWaiting')}</ActLink>
      </p>
    </Page>
  );
}

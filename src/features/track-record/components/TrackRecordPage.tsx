import { useTranslation } from 'react-i18next';
import { Page, PageHead, Section } from '../../../components/Page.tsx';
import { useTitle } from '../../../lib/use-title.ts';

const parts = ['worth', 'bias', 'ranges', 'promotions', 'changed'] as const;

export function TrackRecordPage() {
  const { t } = useTranslation('track-record');
  useTitle(t('title'));
  return (
    <Page>
      <PageHead title={t('title')} lead={t('lead')} />
      <Section title={t('holdsTitle')} className="mt-4 max-w-[800px]">
        <dl>
          {parts.map((part) => (
            <div key={part} className="grid grid-cols-[200px_1fr] gap-6 border-b border-line py-2.5">
              <dt className="font-semibold">{t(`holds.${part}.0`)}</dt>
              <dd className="text-soft">{t(`holds.${part}.1`)}</dd>
            </div>
          ))}
        </dl>
        <p className="mt-3 text-small text-soft">{t('kept')}</p>
      </Section>
    </Page>
  );
}

import { useTranslation } from 'react-i18next';
import type { ImportList } from '../../../../shared/contracts/sales.ts';
import { Section } from '../../../components/Page.tsx';
import { formatDate, formatUnits, formatWeekSpan, weekLabel } from '../../../lib/format.ts';

export function DataHealth({ health }: { health: ImportList['health'] }) {
  const { t } = useTranslation('sales');
  if (!health || health.firstWeek === null || health.lastWeek === null) {
    return (
      <Section title={t('health.title')}>
        <p className="text-soft">{t('health.none')}</p>
      </Section>
    );
  }
  const rows: [string, string, string?][] = [
    [t('health.span'), formatWeekSpan(health.firstWeek, health.lastWeek, t('common:to'))],
    [t('health.items'), formatUnits(health.items)],
    [t('health.locations'), formatUnits(health.locations)],
    [t('health.entries'), formatUnits(health.entriesInForce)],
    [t('health.gaps'), formatUnits(health.gapWeeks), t('health.gapsHint')],
    [t('health.missing'), formatUnits(health.missingWeeks), t('health.missingHint')],
  ];
  return (
    <Section title={t('health.title')}>
      <dl>
        {rows.map(([name, value, hint]) => (
          <div key={name} className="grid grid-cols-[1fr_auto] gap-x-4 border-b border-line py-1.5">
            <dt className="text-soft">{name}</dt>
            <dd className="num font-[560]">{value}</dd>
            {hint && <dd className="col-span-2 text-small text-soft">{hint}</dd>}
          </div>
        ))}
      </dl>
      <p className="mt-2 text-small text-soft">
        {t('health.fresh', { week: weekLabel(health.lastWeek), date: formatDate(health.lastWeek) })}
      </p>
    </Section>
  );
}

import { useQuery } from '@tanstack/react-query';
import { lazy, Suspense } from 'react';
import { useTranslation } from 'react-i18next';
import { Section } from '../../../components/Page.tsx';
import { QueryStates } from '../../../components/states.tsx';
import { linePlanQuery } from '../../../lib/line-plan.ts';
import { describeOutlook } from '../outlook.ts';

/** The chart library comes only with the page that draws. */
const OutlookChart = lazy(async () => ({
  default: (await import('../../../components/OutlookChart.tsx')).OutlookChart,
}));

const historyWeeks = 52;

/** A year of the line's sales and what is planned, with the model's ranges. */
export function LineOutlook({ lineId }: { lineId: number }) {
  const { t } = useTranslation('lines');
  const plan = useQuery(linePlanQuery(lineId, historyWeeks));
  return (
    <Section title={t('outlook.title')}>
      <QueryStates query={plan} loading={t('outlook.loading')}>
        {(answer) => (
          <Suspense fallback={<div className="h-64" />}>
            <OutlookChart
              weeks={describeOutlook(answer)}
              texts={{
                label: t('outlook.label', { line: answer.line.name }),
                caption: t('outlook.caption'),
                asTable: t('outlook.asTable'),
                asChart: t('outlook.asChart'),
                week: t('outlook.week'),
                sold: t('outlook.sold'),
                model: t('outlook.model'),
                plan: t('outlook.plan'),
                range80: t('outlook.range80'),
                range95: t('outlook.range95'),
              }}
            />
          </Suspense>
        )}
      </QueryStates>
    </Section>
  );
}

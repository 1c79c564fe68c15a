import { useQuery } from '@tanstack/react-query';
import { useTranslation } from 'react-i18next';
import { useParams } from 'react-router-dom';
import { addWeeks } from '../../../../shared/domain/weeks.ts';
import { ButtonLink } from '../../../components/Button.tsx';
import { Page, PageHead } from '../../../components/Page.tsx';
import { EmptyState, QueryStates } from '../../../components/states.tsx';
import { useCategories, withCategory } from '../../../lib/categories.ts';
import { linePlanQuery } from '../../../lib/line-plan.ts';
import { useTitle } from '../../../lib/use-title.ts';
import { historyWeeksToAsk } from '../grid-columns.ts';
import { usePageState } from '../use-page-state.ts';
import { ForecastStart } from './ForecastStart.tsx';
import { LinePlanView } from './LinePlanView.tsx';

/** Plan of one line: `/plan/:lineId`. */
export function LinePlanPage() {
  const { t } = useTranslation('plan');
  const lineId = Number(useParams().lineId);
  const [page, changePage] = usePageState();
  const { categories } = useCategories();
  const category = categories.find(({ lines }) => lines.some(({ id }) => id === lineId));
  const lastSold = category?.lastSalesWeek ?? null;
  const seam = lastSold === null ? null : addWeeks(lastSold, 1);
  const query = useQuery({
    ...linePlanQuery(lineId, historyWeeksToAsk(page.from, seam)),
    enabled: Number.isInteger(lineId) && lineId > 0,
    refetchInterval: 15_000,
    // While more history is asked for, what is on screen stays.
    placeholderData: (previous) => (previous?.line.id === lineId ? previous : undefined),
  });
  const plan = query.data;
  useTitle(plan?.line.name ?? t('title'));
  if (!Number.isInteger(lineId) || lineId <= 0) {
    return (
      <Page>
        <PageHead title={t('title')} />
        <EmptyState title={t('noSuchLine')} action={<ButtonLink to="/plan">{t('toCategory')}</ButtonLink>} />
      </Page>
    );
  }
  if (plan && plan.planFirstWeek !== null && plan.version !== null) {
    return <LinePlanView key={plan.line.id} plan={plan} page={page} changePage={changePage} />;
  }
  return (
    <Page>
      {!plan && <PageHead title={t('title')} lead={category?.name} />}
      <div className={plan ? '' : 'mt-6'}>
        <QueryStates query={query} loading={t('loadingLine')}>
          {(shown) => (
            <>
              <PageHead title={shown.line.name} lead={shown.category.name} />
              <div className="mt-6">
                {lastSold === null && shown.historyFirstWeek === null ? (
                  <EmptyState
                    title={t('empty.noSales')}
                    action={
                      <ButtonLink to={withCategory('/sales', shown.category.id)}>{t('empty.toSales')}</ButtonLink>
                    }
                  >
                    {t('empty.noSalesDetail')}
                  </EmptyState>
                ) : (
                  <EmptyState
                    title={t('empty.noForecast')}
                    action={
                      <ForecastStart
                        categoryId={shown.category.id}
                        activeJob={shown.activeJob}
                        mayForecast={shown.may.forecast}
                        horizonWeeks={13}
                        action={t('forecast.category', { category: shown.category.name })}
                      />
                    }
                  >
                    {shown.may.forecast ? t('empty.noForecastDetail') : t('empty.noForecastNotYours')}
                  </EmptyState>
                )}
              </div>
            </>
          )}
        </QueryStates>
      </div>
    </Page>
  );
}

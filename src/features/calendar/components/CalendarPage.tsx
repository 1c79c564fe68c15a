import { keepPreviousData, useQuery } from '@tanstack/react-query';
import { useTranslation } from 'react-i18next';
import { useSearchParams } from 'react-router-dom';
import type { Category } from '../../../../shared/contracts/lines.ts';
import {
  addWeeks,
  isIsoDate,
  startOfTradingWeek,
  type Weekday,
  weeksBetween,
} from '../../../../shared/domain/weeks.ts';
import { ActLink, Button } from '../../../components/Button.tsx';
import { Page, PageHead } from '../../../components/Page.tsx';
import { EmptyState, QueryStates } from '../../../components/states.tsx';
import { Weekline, WeeklineRoom, type WeekRange } from '../../../components/Weekline.tsx';
import { useCategoryInView, withCategory } from '../../../lib/categories.ts';
import { categoryPlanQuery } from '../../../lib/category-plan.ts';
import { useMay } from '../../../lib/session.ts';
import { readToday } from '../../../lib/today.ts';
import { useTitle } from '../../../lib/use-title.ts';
import { calendarQuery } from '../queries.ts';
import { CalendarGrid } from './CalendarGrid.tsx';
import { PromotionPanel } from './PromotionPanel.tsx';

const usualWeeks = 20;
const mostWeeks = 53;

export function CalendarPage() {
  const { t } = useTranslation('calendar');
  useTitle(t('tab'));
  const { category, firstWeekday } = useCategoryInView();
  if (category === null) {
    return (
      <Page>
        <PageHead title={t('title')} />
        <div className="mt-4">
          <EmptyState title={t('noCategoryTitle')}>{t('noCategory')}</EmptyState>
        </div>
      </Page>
    );
  }
  return <CategoryCalendar key={category.id} category={category} firstWeekday={(firstWeekday ?? 1) as Weekday} />;
}

function CategoryCalendar({ category, firstWeekday }: { category: Category; firstWeekday: Weekday }) {
  const { t } = useTranslation('calendar');
  const may = useMay();
  const [parameters, setParameters] = useSearchParams();
  const seam = category.lastSalesWeek ?? startOfTradingWeek(readToday(), firstWeekday);
  const asked = parameters.get('from');
  const firstWeek = asked !== null && isIsoDate(asked) ? startOfTradingWeek(asked, firstWeekday) : addWeeks(seam, -1);
  const weeks = Math.min(mostWeeks, Math.max(4, Number(parameters.get('weeks')) || usualWeeks));
  const calendar = useQuery({
    ...calendarQuery({ categoryId: category.id, firstWeek, weeks }),
    placeholderData: keepPreviousData,
  });
  const plan = useQuery(categoryPlanQuery(category.id));
  const weekline = plan.data?.weekline;

  const show = (from: string, span: number) => {
    setParameters(
      (before) => {
        const after = new URLSearchParams(before);
        after.set('from', from);
        after.set('weeks', String(span));
        after.delete('promotion');
        return after;
      },
      { replace: true },
    );
  };
  const choosePromotion = (index: number | null) => {
    setParameters(
      (before) => {
        const after = new URLSearchParams(before);
        if (index === null) after.delete('promotion');
        else after.set('promotion', String(index));
        return after;
      },
      { replace: true },
    );
  };
  const changeRange = ({ firstWeek: from, lastWeek }: WeekRange) =>
    show(from, Math.min(mostWeeks, Math.max(4, weeksBetween(from, lastWeek) + 1)));
  const chosenText = parameters.get('promotion');
  const chosen = chosenText === null ? null : Number(chosenText);

  return (
    <Page
      weekline={
        weekline ? (
          <Weekline
            weekline={weekline}
            title={category.name}
            range={{ firstWeek, lastWeek: addWeeks(firstWeek, weeks - 1) }}
            onRangeChange={changeRange}
          />
        ) : (
          plan.isLoading && <WeeklineRoom />
        )
      }
    >
      <PageHead
        title={t('title')}
        lead={
          calendar.data
            ? [
                t('lead', { count: calendar.data.promotions.length }),
                t('leadHolidays', { count: calendar.data.holidays.length }),
                t('later'),
              ].join(' ')
            : t('later')
        }
        actions={
          <>
            <Button variant="text" onClick={() => show(addWeeks(firstWeek, -Math.ceil(weeks / 2)), weeks)}>
              {t('earlier')}
            </Button>
            <Button variant="text" onClick={() => show(addWeeks(seam, -1), usualWeeks)}>
              {t('today')}
            </Button>
            <Button variant="text" onClick={() => show(addWeeks(firstWeek, Math.ceil(weeks / 2)), weeks)}>
              {t('later_')}
            </Button>
            {may('edit-calendar', category.id) && (
              <ActLink to={withCategory('/sales', category.id)}>{t('byFile')}</ActLink>
            )}
          </>
        }
      />
      <div className="mt-3">
        <QueryStates query={calendar} loading={t('loading')}>
          {(view) =>
            view.lines.every(({ items }) => items.length === 0) ? (
              <EmptyState
                title={t('emptyTitle')}
                action={
                  may('import-sales', category.id) && (
                    <ActLink to={withCategory('/sales', category.id)}>{t('byFile')}</ActLink>
                  )
                }
              >
                {t('empty')}
              </EmptyState>
            ) : (
              <div className="grid grid-cols-1 gap-x-8 min-[1100px]:grid-cols-[minmax(0,1fr)_288px]">
                <div className="min-w-0">
                  <CalendarGrid
                    view={view}
                    seamAfter={category.lastSalesWeek}
                    chosen={chosen}
                    onChoose={choosePromotion}
                  />
                  {view.promotions.length === 0 && view.prices.length === 0 && (
                    <p className="mt-3 text-soft">{t('nothing')}</p>
                  )}
                </div>
                <PromotionPanel
                  view={view}
                  promotion={chosen === null ? null : (view.promotions[chosen] ?? null)}
                  lastSalesWeek={category.lastSalesWeek}
                  onClose={() => choosePromotion(null)}
                />
              </div>
            )
          }
        </QueryStates>
      </div>
    </Page>
  );
}

import { useQuery } from '@tanstack/react-query';
import { Trans, useTranslation } from 'react-i18next';
import type { CategoryPlan } from '../../../../shared/contracts/plan.ts';
import {
  addWeeks,
  isoWeekOf,
  shortWeekLabel,
  startOfTradingWeek,
  type Weekday,
  weekdayOf,
} from '../../../../shared/domain/weeks.ts';
import { Page } from '../../../components/Page.tsx';
import { QueryStates } from '../../../components/states.tsx';
import { Weekline, WeeklineRoom } from '../../../components/Weekline.tsx';
import { useCategoryInView } from '../../../lib/categories.ts';
import { categoryPlanQuery } from '../../../lib/category-plan.ts';
import { formatSignedPercent, formatUnits, formatWeekday } from '../../../lib/format.ts';
import { readToday } from '../../../lib/today.ts';
import { useTitle } from '../../../lib/use-title.ts';
import { waitingQuery } from '../queries.ts';
import { CategoryGlance } from './CategoryGlance.tsx';
import { WaitingEntries } from './WaitingEntries.tsx';

export function WaitingPage() {
  const { t } = useTranslation('waiting');
  useTitle(t('tab'));
  const { category, firstWeekday } = useCategoryInView();
  const waiting = useQuery(waitingQuery);
  const plan = useQuery({ ...categoryPlanQuery(category?.id ?? 0), enabled: category !== null });
  const today = readToday();
  const week = startOfTradingWeek(today, (firstWeekday ?? 1) as Weekday);
  const weekline = plan.data?.weekline;
  const lastSold = weekline ? addWeeks(weekline.firstWeek, weekline.sold.length - 1) : null;

  return (
    <Page
      weekline={
        weekline && lastSold ? (
          <Weekline
            weekline={weekline}
            title={plan.data?.category.name ?? ''}
            range={{
              firstWeek: addWeeks(lastSold, -12),
              lastWeek: addWeeks(lastSold, Math.min(13, weekline.planned.length)),
            }}
          />
        ) : (
          plan.isLoading && <WeeklineRoom />
        )
      }
    >
      <div className="grid grid-cols-1 gap-x-9 gap-y-8 min-[1100px]:grid-cols-[minmax(0,3fr)_minmax(0,2fr)] min-[1440px]:gap-x-12">
        <section>
          <h1>
            {t('title', {
              weekday: formatWeekday(weekdayOf(today)),
              week: Number(shortWeekLabel(week).slice(1)) || isoWeekOf(today).week,
            })}
          </h1>
          {plan.data && <LastWeek plan={plan.data} />}
          <div className="mt-3">
            <QueryStates query={waiting} loading={t('loading')}>
              {({ entries }) => <WaitingEntries entries={entries} />}
            </QueryStates>
          </div>
        </section>
        {category !== null && (
          <section>
            <h2 className="text-[20px]/6">{t('glance.title', { category: category.name })}</h2>
            <div className="mt-2">
              <QueryStates query={plan}>{(answer) => <CategoryGlance plan={answer} />}</QueryStates>
            </div>
          </section>
        )}
      </div>
    </Page>
  );
}

function LastWeek({ plan }: { plan: CategoryPlan }) {
  const { t } = useTranslation('waiting');
  const category = plan.category.name;
  const sold = plan.weekline?.sold ?? [];
  const units = sold.at(-1);
  if (!plan.weekline || units === null || units === undefined) {
    return <p className="mt-1 text-[14px]/5">{t('leadNothing', { category })}</p>;
  }
  const before = sold.at(-2);
  const lastYear = sold.at(-53);
  const comparisons = [
    before ? t('leadBefore', { change: formatSignedPercent(units / before - 1) }) : null,
    lastYear ? t('leadLastYear', { change: formatSignedPercent(units / lastYear - 1) }) : null,
  ].filter((text) => text !== null);
  return (
    <p className="mt-1 text-[14px]/5">
      <Trans
        t={t}
        i18nKey="lead"
        values={{
          week: Number(shortWeekLabel(addWeeks(plan.weekline.firstWeek, sold.length - 1)).slice(1)),
          units: formatUnits(units),
          category,
        }}
        components={{ 1: <b /> }}
      />
      {comparisons.length > 0 ? `, ${comparisons.join(', ')}.` : '.'}
    </p>
  );
}

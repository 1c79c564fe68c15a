import { useTranslation } from 'react-i18next';
import type { CategoryPlan } from '../../../../shared/contracts/plan.ts';
import { addWeeks, shortWeekLabel, weekLabel } from '../../../../shared/domain/weeks.ts';
import { ActLink } from '../../../components/Button.tsx';
import { EmptyState } from '../../../components/states.tsx';
import { StateMark } from '../../../components/StateRoute.tsx';
import { Table } from '../../../components/Table.tsx';
import { withCategory } from '../../../lib/categories.ts';
import { formatSignedPercent, formatUnits } from '../../../lib/format.ts';
import { listGlanceWeeks, sumLine } from '../glance.ts';
import { GlanceChart } from './GlanceChart.tsx';

export function CategoryGlance({ plan }: { plan: CategoryPlan }) {
  const { t } = useTranslation('waiting');
  if (!plan.weekline || plan.lines.length === 0) {
    return (
      <EmptyState
        title={t('glance.noPlanTitle')}
        action={<ActLink to={withCategory('/plan', plan.category.id)}>{t('glance.toPlan')}</ActLink>}
      >
        {t('glance.noPlan')}
      </EmptyState>
    );
  }
  const weeksAhead = Math.min(13, plan.weekline.planned.length);
  const weeks = listGlanceWeeks(plan.weekline);
  const firstShown = addWeeks(
    plan.weekline.firstWeek,
    plan.weekline.sold.length - weeks.filter((week) => !week.isPlanned).length,
  );
  const lines = plan.lines.map((line) => ({ ...line, sum: sumLine(line.plan, line.lastYear) }));
  const total = lines.reduce((sum, line) => sum + line.sum.planned, 0);
  return (
    <>
      <GlanceChart
        weeks={weeks}
        firstWeek={firstShown}
        lockedWeeks={plan.weekline.lockedWeeks}
        label={t('glance.chart', {
          category: plan.category.name,
          sold: weeks.filter((week) => !week.isPlanned).length,
          planned: weeksAhead,
        })}
      />
      <Table caption={t('glance.tableCaption', { category: plan.category.name })} className="mt-2">
        <thead>
          <tr>
            <th scope="col">{t('glance.line')}</th>
            <th scope="col">{t('glance.state')}</th>
            <th scope="col" className="num">
              {t('glance.lockedTo')}
            </th>
            <th scope="col" className="num">
              {t('glance.weeks', { count: weeksAhead })}
            </th>
            <th scope="col" className="num">
              {t('glance.againstLastYear')}
            </th>
          </tr>
        </thead>
        <tbody>
          {lines.map((line) => (
            <tr key={line.id}>
              <th scope="row">
                <ActLink to={withCategory(`/plan/${line.id}`, plan.category.id)} className="!text-ink !font-normal">
                  {line.name}
                </ActLink>
              </th>
              <td className="whitespace-nowrap">
                {line.version === null ? (
                  <span className="text-soft">{t('glance.noForecast')}</span>
                ) : (
                  <>
                    <StateMark state={line.state} />
                    {t(`common:state.${line.state}`)} {line.version.number}
                  </>
                )}
              </td>
              <td className="num">{lockedTo(line.lockedWeeks) ?? t('glance.none')}</td>
              <td className="num">{line.version === null ? t('glance.none') : formatUnits(line.sum.planned)}</td>
              <td className="num">
                {line.sum.againstLastYear === null ? t('glance.none') : formatSignedPercent(line.sum.againstLastYear)}
              </td>
            </tr>
          ))}
        </tbody>
        <tfoot>
          <tr>
            <th scope="row" colSpan={3}>
              {plan.category.name}
            </th>
            <td className="num">{formatUnits(total)}</td>
            <td />
          </tr>
        </tfoot>
      </Table>
      {plan.planFirstWeek && (
        <p className="mt-2 text-tiny text-soft">
          {t('glance.note', { week: weekLabel(addWeeks(plan.planFirstWeek, -1)) })}
        </p>
      )}
    </>
  );
}

function lockedTo(lockedWeeks: readonly string[]): string | null {
  const last = [...lockedWeeks].sort().at(-1);
  if (last === undefined) return null;
  return new Date().getUTCFullYear() === Number(weekLabel(last).slice(0, 4)) ? shortWeekLabel(last) : weekLabel(last);
}

import { useQuery } from '@tanstack/react-query';
import { useCallback, useMemo, useState } from 'react';
import { useTranslation } from 'react-i18next';
import { Link } from 'react-router-dom';
import type { CategoryPlan } from '../../../../shared/contracts/plan.ts';
import { addWeeks, listWeeks } from '../../../../shared/domain/weeks.ts';
import { Button, ButtonLink } from '../../../components/Button.tsx';
import { Page, PageHead } from '../../../components/Page.tsx';
import { StateMark } from '../../../components/StateRoute.tsx';
import { EmptyState, QueryStates } from '../../../components/states.tsx';
import { Table } from '../../../components/Table.tsx';
import { Weekline } from '../../../components/Weekline.tsx';
import { useCategoryInView, withCategory } from '../../../lib/categories.ts';
import { categoryPlanQuery } from '../../../lib/category-plan.ts';
import {
  formatDate,
  formatInstant,
  formatNumber,
  formatSignedPercent,
  personLocale,
  shortWeekLabel,
  weekLabel,
} from '../../../lib/format.ts';
import { readToday } from '../../../lib/today.ts';
import { useTitle } from '../../../lib/use-title.ts';
import { sumLines } from '../category-rows.ts';
import { buildColumns, defaultWindow } from '../grid-columns.ts';
import type { GridViewRow } from '../grid-table.ts';
import type { CellMarks, RowFigures } from '../line-figures.ts';
import { decimalMarkOf } from '../number-input.ts';
import { formatRectangle } from '../paste.ts';
import { rectangleOf, type Selection } from '../selection.ts';
import { usePageState } from '../use-page-state.ts';
import { FindingsNote } from './FindingsNote.tsx';
import { ForecastStart } from './ForecastStart.tsx';
import { PlanGrid } from './PlanGrid.tsx';
import { RoundDialog } from './RoundDialog.tsx';

const plainMarks: CellMarks = {
  overridden: null,
  isDueAnotherLook: false,
  needsDecision: false,
  isOutsideRange: false,
  isBeyondSeen: false,
  isPending: false,
};
const changedMarks: CellMarks = { ...plainMarks, overridden: 'through' };
const noPromotions: never[] = [];

/** Plan of a whole category: `/plan`. */
export function CategoryPlanPage() {
  const { t } = useTranslation('plan');
  useTitle(t('title'));
  const { category } = useCategoryInView();
  if (!category) {
    return (
      <Page>
        <EmptyState title={t('empty.noCategory')}>{t('empty.noCategoryDetail')}</EmptyState>
      </Page>
    );
  }
  return <OfCategory key={category.id} categoryId={category.id} name={category.name} />;
}

function OfCategory({ categoryId, name }: { categoryId: number; name: string }) {
  const { t } = useTranslation('plan');
  const query = useQuery({ ...categoryPlanQuery(categoryId), refetchInterval: 30_000 });
  const plan = query.data;
  if (plan && plan.planFirstWeek !== null && plan.lines.length > 0) {
    return <CategoryPlanView plan={plan} planFirstWeek={plan.planFirstWeek} />;
  }
  return (
    <Page>
      <PageHead title={t('title')} lead={name} />
      <div className="mt-6">
        <QueryStates query={query} loading={t('loadingCategory')}>
          {(shown) =>
            shown.lines.length === 0 ? (
              <EmptyState
                title={t('empty.noLines')}
                action={<ButtonLink to={withCategory('/sales', categoryId)}>{t('empty.toSales')}</ButtonLink>}
              >
                {t('empty.noLinesDetail')}
              </EmptyState>
            ) : shown.lastSalesWeek === null ? (
              <EmptyState
                title={t('empty.noSales')}
                action={<ButtonLink to={withCategory('/sales', categoryId)}>{t('empty.toSales')}</ButtonLink>}
              >
                {t('empty.noSalesDetail')}
              </EmptyState>
            ) : (
              <EmptyState
                title={t('empty.noForecast')}
                action={
                  <ForecastStart
                    categoryId={categoryId}
                    activeJob={shown.activeJob}
                    mayForecast={shown.may.forecast}
                    horizonWeeks={13}
                    action={t('forecast.category', { category: name })}
                  />
                }
              >
                {shown.may.forecast ? t('empty.noForecastDetail') : t('empty.noForecastNotYours')}
              </EmptyState>
            )
          }
        </QueryStates>
      </div>
    </Page>
  );
}

function CategoryPlanView({ plan, planFirstWeek }: { plan: CategoryPlan; planFirstWeek: string }) {
  const { t } = useTranslation('plan');
  const [page, changePage] = usePageState();
  const [isRoundOpen, setRoundOpen] = useState(false);
  const { planWeeks } = plan;
  const span = useMemo(
    () => ({ historyFirstWeek: plan.historyFirstWeek, planFirstWeek, planWeeks, lockedWeeks: [] }),
    [plan.historyFirstWeek, planFirstWeek, planWeeks],
  );
  const first = defaultWindow(span);
  const from = page.from ?? first?.from ?? '';
  const to = page.to ?? first?.to ?? '';
  const columns = useMemo(() => buildColumns(span, from, to), [span, from, to]);
  const weeks = useMemo(() => listWeeks(planFirstWeek, planWeeks), [planFirstWeek, planWeeks]);
  const rows = useMemo<GridViewRow[]>(() => {
    const figuresOf = (line: { sold: (number | null)[]; model: number[]; plan: number[] }): RowFigures => ({
      history: line.sold,
      gaps: [],
      model: line.model,
      plan: line.plan,
      marks: weeks.map((_, week) => (line.plan[week] === line.model[week] ? plainMarks : changedMarks)),
    });
    const total = sumLines(plan.lines, weeks.length);
    return [
      ...plan.lines.map((line): GridViewRow => {
        const locked = new Set(line.lockedWeeks);
        return {
          key: `line${line.id}`,
          name: line.name,
          heading: (
            <>
              <StateMark state={line.state} />
              <Link
                className="hover:text-moss hover:underline"
                to={withCategory(`/plan/${line.id}`, plan.category.id)}
                aria-label={t('category.openLine', { line: line.name })}
              >
                {line.name}
              </Link>
            </>
          ),
          isTotal: false,
          figures: figuresOf(line),
          lockedAt: weeks.map((week) => locked.has(week)),
        };
      }),
      {
        key: 'total',
        name: t('grid.categoryTotal'),
        heading: t('grid.categoryTotal'),
        isTotal: true,
        figures: { ...figuresOf(total), marks: weeks.map(() => plainMarks) },
        lockedAt: weeks.map((week) => plan.lines.every(({ lockedWeeks }) => lockedWeeks.includes(week))),
      },
    ];
  }, [plan.lines, plan.category.id, weeks, t]);
  const longest = Math.max(...rows.map(({ name }) => name.length));
  const [selection, setSelection] = useState<Selection | null>(null);
  const copyText = useCallback(
    (chosen: Selection) => {
      const { firstRow, lastRow, firstColumn, lastColumn } = rectangleOf(chosen);
      return formatRectangle(
        rows
          .slice(firstRow, lastRow + 1)
          .map(({ figures }) =>
            columns
              .slice(firstColumn, lastColumn + 1)
              .map(({ kind, index }) => (kind === 'history' ? figures.history[index] : figures.plan[index]) ?? null),
          ),
        decimalMarkOf(personLocale),
      );
    },
    [rows, columns],
  );
  const { round } = plan;
  const isLate = round !== null && round.due < readToday();
  return (
    <Page
      weekline={
        plan.weekline && (
          <Weekline
            weekline={plan.weekline}
            title={plan.category.name}
            range={{ firstWeek: columns[0]?.weekStart ?? from, lastWeek: columns.at(-1)?.weekStart ?? to }}
            onRangeChange={({ firstWeek, lastWeek }) => changePage({ from: firstWeek, to: lastWeek })}
          />
        )
      }
    >
      <PageHead
        title={plan.category.name}
        lead={
          <>
            {t('category.lead', {
              lines: plan.lines.length,
              first: weekLabel(planFirstWeek),
              last: weekLabel(addWeeks(planFirstWeek, planWeeks - 1)),
              // The week that the forecast read last; newer sales may be in.
              sales: weekLabel(addWeeks(planFirstWeek, -1)),
            })}{' '}
            {round && (
              <span className={isLate ? 'text-madder' : ''}>
                {t('category.roundDue', {
                  due: formatDate(round.due),
                  first: weekLabel(round.firstWeek),
                  last: weekLabel(round.lastWeek),
                })}
              </span>
            )}{' '}
            {round && plan.may.changeRound && (
              <Button variant="text" className="!py-0" onClick={() => setRoundOpen(true)}>
                {t('category.changeDue')}
              </Button>
            )}
          </>
        }
        actions={
          <ForecastStart
            categoryId={plan.category.id}
            activeJob={plan.activeJob}
            mayForecast={plan.may.forecast}
            horizonWeeks={planWeeks}
            action={plan.isBehindSales ? t('forecast.again') : t('forecast.category', { category: plan.category.name })}
            isQuiet={!plan.isBehindSales}
          />
        }
      />
      {plan.isBehindSales && <p className="mt-2 border-l-2 border-turmeric pl-3">{t('behindSales')}</p>}
      <div className="mt-3 flex max-h-[60vh] flex-col">
        <PlanGrid
          label={t('grid.categoryLabel', { category: plan.category.name })}
          cornerLabel={t('grid.corner.lines')}
          nameWidth={Math.min(260, Math.max(132, Math.round(longest * 6.7) + 40))}
          rows={rows}
          columns={columns}
          promotions={noPromotions}
          holidays={plan.weekline?.holidays ?? noPromotions}
          selection={selection}
          onSelect={setSelection}
          copyText={copyText}
          editor={null}
        />
      </div>
      <h2 className="mt-6 mb-2 border-t border-rule pt-2">{t('category.lines')}</h2>
      <Table caption={t('category.lines')}>
        <thead>
          <tr>
            <th scope="col">{t('category.line')}</th>
            <th scope="col">{t('category.state')}</th>
            <th scope="col">{t('category.updated')}</th>
            <th scope="col" className="num">
              {t('category.lockedTo')}
            </th>
            <th scope="col" className="num">
              {t('category.overridesHead')}
            </th>
            <th scope="col" className="num">
              {t('category.dueHead')}
            </th>
            <th scope="col" className="num">
              {t('category.planned')}
            </th>
            <th scope="col" className="num">
              {t('category.lastYear')}
            </th>
          </tr>
        </thead>
        <tbody>
          {plan.lines.map((line) => {
            const planned = line.plan.reduce((sum, units) => sum + units, 0);
            const isYearKnown = line.lastYear.length > 0 && line.lastYear.every((units) => units !== null);
            const before = line.lastYear.reduce<number>((sum, units) => sum + (units ?? 0), 0);
            return (
              <tr key={line.id}>
                <th scope="row">
                  <Link className="act" to={withCategory(`/plan/${line.id}`, plan.category.id)}>
                    {line.name}
                  </Link>
                  <FindingsNote findings={line.findings} />
                </th>
                <td className="whitespace-nowrap">
                  <StateMark state={line.state} />
                  {line.version
                    ? t('category.version', { state: t(`common:state.${line.state}`), number: line.version.number })
                    : t('category.none')}
                </td>
                <td className="whitespace-nowrap text-soft">
                  {line.version && `${formatInstant(line.version.at)}, ${line.version.author}`}
                </td>
                <td className="num">
                  {line.lockedWeeks.length > 0 ? shortWeekLabel(line.lockedWeeks.toSorted().at(-1) ?? '') : '–'}
                </td>
                <td className="num">{line.overrides}</td>
                <td className={`num ${line.dueAnotherLook > 0 ? 'font-[640] text-plum' : ''}`}>
                  {line.dueAnotherLook}
                </td>
                <td className="num">{formatNumber(planned)}</td>
                <td className="num">
                  {isYearKnown && before > 0 ? formatSignedPercent((planned - before) / before) : '–'}
                </td>
              </tr>
            );
          })}
        </tbody>
      </Table>
      {isRoundOpen && round && (
        <RoundDialog categoryId={plan.category.id} round={round} weeks={weeks} onClose={() => setRoundOpen(false)} />
      )}
    </Page>
  );
}

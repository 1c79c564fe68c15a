import { memo } from 'react';
import { useTranslation } from 'react-i18next';
import type { CalendarHoliday } from '../../../../shared/contracts/calendar.ts';
import { formatDate, formatMonth } from '../../../lib/format.ts';
import type { GridColumn, Pennant, Run } from '../grid-columns.ts';

const monthHeight = 21;
const laneHeight = 17;
const weekHeight = 20;
const dateHeight = 21;

export function headHeight(lanes: number): number {
  return monthHeight + lanes * laneHeight + (lanes > 0 ? 3 : 0) + weekHeight + dateHeight;
}

interface GridHeadProps {
  cornerLabel: string;
  nameWidth: number;
  columns: readonly GridColumn[];
  lefts: readonly number[];
  widths: readonly number[];
  shown: readonly number[];
  months: readonly Run<string>[];
  pennants: readonly Pennant[];
  hiddenPennants: number;
  lanes: number;
  holidays: readonly CalendarHoliday[];
  seamGap: number;
  selectedFirst: number;
  selectedLast: number;
}

/** Months, promotions as pennants, week names and dates, holidays on the base line. */
export const GridHead = memo(function GridHead(props: GridHeadProps) {
  const { columns, lefts, widths, seamGap } = props;
  const { t } = useTranslation('plan');
  const firstShown = props.shown[0] ?? 0;
  const lastShown = props.shown.at(-1) ?? 0;
  const widthOf = (at: number) => (widths[at] ?? 0) - (columns[at]?.isBeforeSeam ? seamGap : 0);
  const inView = (first: number, last: number) => last >= firstShown && first <= lastShown;
  const holidaysOf = new Map<string, CalendarHoliday[]>();
  for (const holiday of props.holidays) {
    holidaysOf.set(holiday.weekStart, [...(holidaysOf.get(holiday.weekStart) ?? []), holiday]);
  }
  const pennantsTop = monthHeight;
  const weeksTop = headHeight(props.lanes) - weekHeight - dateHeight;
  return (
    <div role="rowgroup" className="plan-head" style={{ height: headHeight(props.lanes) }}>
      <div role="row" aria-rowindex={1}>
        <div role="columnheader" aria-colindex={1} className="plan-corner" style={{ width: props.nameWidth }}>
          {props.hiddenPennants > 0 && (
            <span className="block text-turmeric">{t('grid.morePromotions', { count: props.hiddenPennants })}</span>
          )}
          {props.cornerLabel}
        </div>
        {props.shown.map((at) => {
          const column = columns[at];
          if (!column) return null;
          const holidays = holidaysOf.get(column.weekStart) ?? [];
          const promoted = props.pennants
            .filter(({ first, last }) => at >= first && at <= last)
            .map(({ name }) => name);
          const isChosen = at >= props.selectedFirst && at <= props.selectedLast;
          return (
            <div
              key={column.weekStart}
              role="columnheader"
              aria-colindex={at + 2}
              data-heading="week"
              data-index={at}
              className={`plan-week${column.kind === 'plan' ? ' is-plan' : ''}${isChosen ? ' is-chosen' : ''}`}
              style={{ left: lefts[at], width: widthOf(at), top: weeksTop }}
              title={holidays.map(({ name, date }) => `${name}, ${formatDate(date)}`).join('\n') || undefined}
            >
              <span className="plan-week-name">
                <span className="sr-only">{column.fullLabel.slice(0, 5)}</span>
                {column.label}
              </span>
              <span className="plan-week-date">{formatDate(column.weekStart)}</span>
              {promoted.length > 0 && (
                <span className="sr-only">{t('grid.promoted', { names: promoted.join(', ') })}</span>
              )}
              {holidays.length > 0 && (
                <span className="plan-holiday">
                  <span className="sr-only">{holidays.map(({ name }) => name).join(', ')}</span>
                  <svg width="8" height="8" viewBox="0 0 8 8" aria-hidden="true">
                    <path d="M4 0L8 4L4 8L0 4Z" fill="var(--ink)" />
                  </svg>
                </span>
              )}
            </div>
          );
        })}
      </div>
      <div aria-hidden="true">
        {props.months
          .filter((run) => inView(run.first, run.last))
          .map((run, position) => {
            const left = lefts[run.first] ?? 0;
            const width = (lefts[run.last] ?? 0) + widthOf(run.last) - left;
            const isJanuary = run.value.endsWith('-01') || position === 0;
            const monthName = formatMonth(`${run.value}-01`);
            return (
              <div key={`${run.value}/${run.first}`} className="plan-month" style={{ left, width }}>
                <span>
                  {width < monthName.length * 7.6 + 12 ? monthName.slice(0, 3) : monthName}
                  {isJanuary && width > 110 ? ` ${run.value.slice(0, 4)}` : ''}
                </span>
              </div>
            );
          })}
      </div>
      <div aria-hidden="true">
        {props.pennants
          .filter((pennant) => inView(pennant.first, pennant.last))
          .map((pennant) => {
            const left = lefts[pennant.first] ?? 0;
            const width = Math.max(24, (lefts[pennant.last] ?? 0) + widthOf(pennant.last) - left - 2);
            const point = 8;
            const free =
              (pennant.freeUntil < columns.length ? (lefts[pennant.freeUntil] ?? 0) : Infinity) - left - width - 4;
            const nameWidth = pennant.name.length * 5.9 + 4;
            const isBeside = nameWidth > width - 14 && nameWidth < free;
            const words = `${pennant.name}, ${formatDate(pennant.firstWeek)}`;
            return (
              <div
                key={`${pennant.name}/${pennant.firstWeek}`}
                className="plan-pennant"
                style={{ left, width, top: pennantsTop + pennant.lane * laneHeight }}
                title={words}
              >
                <svg width={width} height="17" aria-hidden="true">
                  <path
                    d={`M1 1.5H${width - point}L${width} 8L${width - point} 14.5H1Z`}
                    fill="var(--turmeric-tint)"
                    stroke="var(--turmeric)"
                    strokeWidth=".8"
                  />
                  <path d="M1 .5V17" stroke="var(--turmeric)" strokeWidth="1.6" />
                </svg>
                <span style={isBeside ? { left: width + 4, width: nameWidth } : undefined}>{pennant.name}</span>
              </div>
            );
          })}
      </div>
    </div>
  );
});

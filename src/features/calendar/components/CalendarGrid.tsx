import { Fragment, useState } from 'react';
import { useTranslation } from 'react-i18next';
import type { CalendarPromotion, CalendarView } from '../../../../shared/contracts/calendar.ts';
import { addWeeks, listWeeks, shortWeekLabel, weekLabel, weeksBetween } from '../../../../shared/domain/weeks.ts';
import { formatDate, formatMoney, formatMonth, formatPercent, formatWeekSpan } from '../../../lib/format.ts';
import { useCurrency } from '../../../lib/settings.ts';
import { layBars, listMonths, listPriceSteps, type PriceStep, type PromotionBar } from '../layout.ts';

const laneHeight = 25;

interface GridProps {
  view: CalendarView;
  /** Last week sold; the seam stands after it. */
  seamAfter: string | null;
  chosen: number | null;
  onChoose: (index: number | null) => void;
}

/** Weeks across, lines and their items down: promotions as pennant bars, regular prices as steps, holidays as lozenges. */
export function CalendarGrid({ view, seamAfter, chosen, onChoose }: GridProps) {
  const { t } = useTranslation('calendar');
  const [openLines, setOpenLines] = useState<ReadonlySet<number>>(new Set());
  const weeks = listWeeks(view.firstWeek, view.weeks);
  const seam = seamAfter === null ? null : weeksBetween(view.firstWeek, seamAfter) + 1;
  const seamAt = seam !== null && seam > 0 && seam < view.weeks ? seam : null;
  const holidays = weeks.map((week) => view.holidays.filter(({ weekStart }) => weekStart === week));
  const toggle = (lineId: number) =>
    setOpenLines((before) => {
      const after = new Set(before);
      if (!after.delete(lineId)) after.add(lineId);
      return after;
    });
  return (
    <div className="relative overflow-x-auto" tabIndex={0} role="region" aria-label={t('tab')}>
      <table className="w-full table-fixed border-collapse" style={{ minWidth: 180 + view.weeks * 36 }}>
        <caption className="sr-only">
          {t('caption', {
            category: view.category.name,
            first: weekLabel(view.firstWeek),
            last: weekLabel(addWeeks(view.firstWeek, view.weeks - 1)),
          })}
        </caption>
        <colgroup>
          <col className="w-[180px]" />
          {weeks.map((week) => (
            <col key={week} />
          ))}
        </colgroup>
        <thead>
          <tr>
            <td />
            {listMonths(view.firstWeek, view.weeks).map((month) => (
              <td key={month.day} colSpan={month.weeks} className="truncate pl-1 font-semibold">
                {month.weeks > 1 && formatMonth(month.day)}
                {month.weeks > 2 && month.day.slice(5, 7) === '01' && ` ${month.day.slice(0, 4)}`}
              </td>
            ))}
          </tr>
          <tr className="border-b border-rule">
            <th scope="col" className="text-left text-tiny font-normal text-soft">
              {t('name')}
            </th>
            {weeks.map((week, position) => (
              <th
                key={week}
                scope="col"
                className={`px-0 pt-0.5 pb-1 text-center align-bottom ${
                  seamAt !== null && position < seamAt ? 'font-normal text-soft' : 'font-semibold'
                } ${seamAt === position ? 'border-l-2 border-dashed border-ink' : ''}`}
              >
                {shortWeekLabel(week)}
                <span
                  className="block text-[10.5px]/[13px] font-normal whitespace-nowrap text-soft"
                  title={formatDate(week)}
                >
                  <span className="max-[1439px]:hidden">{formatDate(week)}</span>
                  <span className="min-[1440px]:hidden">{Number(week.slice(8))}</span>
                </span>
              </th>
            ))}
          </tr>
        </thead>
        <tbody>
          <tr className="border-b border-ink">
            <th scope="row" className="text-left font-normal">
              {t('holidays')}
            </th>
            {holidays.map((days, position) => (
              <td
                key={weeks[position]}
                className={`relative h-11 p-0 ${seamAt === position ? 'border-l-2 border-dashed border-ink' : 'border-l border-line'}`}
              >
                {days.length > 0 && (
                  <HolidayMark
                    days={days}
                    isLow={isHolidayLow(holidays, position)}
                    isAtRim={position > view.weeks - 3}
                  />
                )}
              </td>
            ))}
          </tr>
          {view.lines.map((line) => {
            const isOpen = openLines.has(line.id);
            return (
              <Fragment key={line.id}>
                <tr className={isOpen ? '' : 'border-b border-rule'}>
                  <th scope="row" className="py-1 pr-2 text-left align-top font-[560]">
                    {line.name}
                    {line.items.length > 0 && (
                      <button
                        type="button"
                        className="act block text-tiny font-normal"
                        aria-expanded={isOpen}
                        onClick={() => toggle(line.id)}
                      >
                        {isOpen ? t('hide') : t('items', { count: line.items.length })}
                      </button>
                    )}
                  </th>
                  <td colSpan={view.weeks} className="h-px p-0 align-top">
                    <Track
                      view={view}
                      itemIds={line.items.map(({ id }) => id)}
                      seamAt={seamAt}
                      chosen={chosen}
                      onChoose={onChoose}
                    />
                  </td>
                </tr>
                {isOpen &&
                  line.items.map((item, index) => (
                    <tr
                      key={item.id}
                      className={index === line.items.length - 1 ? 'border-b border-rule' : 'border-b border-line'}
                    >
                      <th scope="row" className="py-1 pr-2 pl-3 text-left align-top font-normal text-soft">
                        {item.name}
                      </th>
                      <td colSpan={view.weeks} className="h-px p-0 align-top">
                        <Track
                          view={view}
                          itemIds={[item.id]}
                          steps={listPriceSteps(view, item.id)}
                          seamAt={seamAt}
                          chosen={chosen}
                          onChoose={onChoose}
                          isTermShown
                        />
                      </td>
                    </tr>
                  ))}
              </Fragment>
            );
          })}
        </tbody>
      </table>
    </div>
  );
}

/** Neighbouring holidays write their names in turn above and below. */
function isHolidayLow(holidays: readonly unknown[][], position: number): boolean {
  let run = 0;
  for (let before = position - 1; before >= 0 && (holidays[before]?.length ?? 0) > 0; before -= 1) run += 1;
  return run % 2 === 1;
}

function HolidayMark({ days, isLow, isAtRim }: { days: CalendarView['holidays']; isLow: boolean; isAtRim: boolean }) {
  const first = days[0]?.name ?? '';
  return (
    <span title={days.map(({ name, date }) => `${name}, ${formatDate(date)}`).join('; ')}>
      <span
        className={`absolute text-[10.5px]/[13px] whitespace-nowrap ${isLow ? 'top-[17px]' : 'top-[3px]'} ${
          isAtRim ? 'right-0' : 'left-1/2 -translate-x-1/2'
        }`}
      >
        {first}
        {days.length > 1 && ` +${days.length - 1}`}
        <span className="sr-only">{days.slice(1).map(({ name }) => `, ${name}`)}</span>
      </span>
      <svg
        className="absolute -bottom-[5px] left-1/2 z-10 -ml-[5px]"
        width="10"
        height="9"
        viewBox="0 0 10 9"
        aria-hidden="true"
      >
        <path d="M5 .5L9 4.5L5 8.5L1 4.5Z" fill="var(--ink)" stroke="var(--paper)" strokeWidth=".8" />
      </svg>
    </span>
  );
}

function Track({
  view,
  itemIds,
  steps = [],
  seamAt,
  chosen,
  onChoose,
  isTermShown = false,
}: {
  view: CalendarView;
  itemIds: number[];
  steps?: PriceStep[];
  seamAt: number | null;
  chosen: number | null;
  onChoose: (index: number | null) => void;
  isTermShown?: boolean;
}) {
  const { t } = useTranslation('calendar');
  const currency = useCurrency();
  const labelOf = (promotion: CalendarPromotion) =>
    isTermShown && promotion.depth !== null && promotion.depth > 0
      ? t('off', { depth: formatPercent(promotion.depth, 0) })
      : promotion.name;
  const bars = layBars(view, itemIds, labelOf);
  const percent = (weeks: number) => `${(weeks / view.weeks) * 100}%`;
  const lanes = Math.max(1, ...bars.map(({ lane }) => lane + 1));
  const stepRoom = steps.length > 0 ? 18 : 0;
  const height = 6 + lanes * laneHeight + (bars.length === 0 && stepRoom > 0 ? stepRoom - laneHeight + 6 : stepRoom);
  const stepWords = steps.map(({ position, price }) =>
    t('priceFrom', { price: formatMoney(price, currency), week: weekLabel(addWeeks(view.firstWeek, position)) }),
  );
  return (
    <div className="relative h-full bg-sheet" style={{ minHeight: Math.max(32, height) }}>
      {Array.from({ length: view.weeks }, (_, position) => (
        <span
          key={position}
          aria-hidden="true"
          className={`absolute top-0 bottom-0 ${
            position === seamAt ? 'border-l-2 border-dashed border-ink' : 'border-l border-line'
          } ${seamAt !== null && position < seamAt ? 'bg-paper' : ''}`}
          style={{ left: percent(position), width: percent(1) }}
        />
      ))}
      {steps.length > 0 && (
        <>
          <span className="sr-only">{t('regularPrice', { steps: stepWords.join(', ') })}</span>
          {steps.map((step, index) => {
            const end = steps[index + 1]?.position ?? view.weeks;
            const isUp = step.before === null || step.price >= step.before;
            return (
              <span
                key={step.position}
                aria-hidden="true"
                className="absolute border-ink"
                style={{
                  left: percent(step.position),
                  width: percent(end - step.position),
                  bottom: (index % 2 === 0) === isUp || step.before === null ? 4 : 8,
                  borderBottomWidth: 1.3,
                }}
              >
                <span className="absolute bottom-0 left-1 text-[10.5px]/[13px] whitespace-nowrap">
                  {formatMoney(step.price, currency)}
                  {step.isMixed && ' ±'}
                </span>
              </span>
            );
          })}
        </>
      )}
      {bars.map((bar) => (
        <Bar
          key={bar.index}
          bar={bar}
          left={percent(bar.first)}
          width={percent(bar.last - bar.first + 1)}
          isChosen={bar.index === chosen}
          onChoose={() => onChoose(bar.index === chosen ? null : bar.index)}
          label={labelOf(bar.promotion)}
        />
      ))}
    </div>
  );
}

/** A pennant as long as its weeks: mast at the first one, pointed end. */
function Bar({
  bar,
  left,
  width,
  isChosen,
  onChoose,
  label,
}: {
  bar: PromotionBar;
  left: string;
  width: string;
  isChosen: boolean;
  onChoose: () => void;
  label: string;
}) {
  const { promotion } = bar;
  return (
    <button
      type="button"
      aria-pressed={isChosen}
      title={`${promotion.name}, ${formatWeekSpan(promotion.firstWeek, promotion.lastWeek)}`}
      aria-label={`${promotion.name}, ${formatWeekSpan(promotion.firstWeek, promotion.lastWeek)}`}
      className={`absolute flex h-[19px] items-center border-l-[1.6px] border-turmeric text-left ${isChosen ? 'z-10' : ''}`}
      style={{ left, width, top: 6 + bar.lane * laneHeight }}
      onClick={onChoose}
    >
      <svg
        className="absolute inset-0 h-full w-full"
        viewBox="0 0 100 19"
        preserveAspectRatio="none"
        aria-hidden="true"
      >
        <path
          d="M0 .5H92L99.5 9.5L92 18.5H0Z"
          fill={isChosen ? 'var(--pennant)' : 'var(--turmeric-tint)'}
          stroke={isChosen ? 'var(--moss)' : 'var(--turmeric)'}
          strokeWidth={isChosen ? 2 : 0.8}
          vectorEffect="non-scaling-stroke"
        />
      </svg>
      <span
        className={`text-tiny font-[560] whitespace-nowrap ${
          bar.isLabelBeside
            ? 'absolute left-full pl-1.5 text-turmeric'
            : `relative overflow-hidden pl-1.5 text-ellipsis ${isChosen ? 'text-on-pennant' : 'text-turmeric'}`
        }`}
      >
        {label}
      </span>
    </button>
  );
}

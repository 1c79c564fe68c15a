import { type ReactNode, useLayoutEffect, useMemo, useRef, useState } from 'react';
import { useTranslation } from 'react-i18next';
import type { Weekline as WeeklineContract } from '../../shared/contracts/plan.ts';
import { addDays, shortWeekLabel, weekLabel, weeksBetween } from '../../shared/domain/weeks.ts';
import { formatLongDate, formatMonthLetter, formatUnits } from '../lib/format.ts';
import { Dialog } from './Dialog.tsx';
import { Table } from './Table.tsx';
import {
  type BandWeek,
  chooseScaleLines,
  findRuns,
  type Handle,
  listBandWeeks,
  moveHandle,
  moveRange,
  stepOfKey,
  toPositions,
  type WeekRange,
} from './weekline-geometry.ts';

export type { WeekRange };

export interface WeeklineProps {
  weekline: WeeklineContract;
  /** What the units are of: a category or a line. */
  title: string;
  /** Weeks that the page shows. */
  range: WeekRange;
  /** Without it the band only shows. */
  onRangeChange?: (range: WeekRange) => void;
  /** Words between the handles; without it the number of weeks shown. */
  caption?: string;
}

const top = 36;
const below = 34;
const edge = 24;
const handleWidth = 50;

/** From and to, px. */
type Span = [number, number];

/** Keeps the weekline's room while it is fetched, so that nothing jumps. */
export function WeeklineRoom() {
  return <div className="h-[137px] border-t border-line min-[1440px]:h-[161px]" aria-hidden="true" />;
}

function useWidth(): [(element: HTMLElement | null) => void, number] {
  const [element, setElement] = useState<HTMLElement | null>(null);
  const [width, setWidth] = useState(1440);
  useLayoutEffect(() => {
    if (!element) return;
    const read = () => setWidth(Math.max(640, element.clientWidth));
    read();
    const observer = new ResizeObserver(read);
    observer.observe(element);
    return () => observer.disconnect();
  }, [element]);
  return [setElement, width];
}

/**
 * All weeks from the first sale to the plan's end on one band: height = units, a seam after the last week sold, pennants over
 * promotions, a solid foot under locked weeks. Two handles set the weeks that the page shows.
 */
export function Weekline({ weekline, title, range, onRangeChange, caption }: WeeklineProps) {
  const { t } = useTranslation('common');
  const [setElement, width] = useWidth();
  const [isTableOpen, setTableOpen] = useState(false);
  const weeks = useMemo(() => listBandWeeks(weekline), [weekline]);
  if (weeks.length === 0) return null;

  const firstWeek = weekline.firstWeek;
  const lastWeek = weeks.at(-1)?.weekStart ?? firstWeek;
  const hasLastYear = weeks.some((week) => week.lastYear !== null);
  const names = { first: weekLabel(firstWeek), last: weekLabel(lastWeek) };
  const plannedUnits = weekline.planned.reduce((sum, units) => sum + units, 0);
  const soldUnits = weekline.sold.reduce<number>((sum, units) => sum + (units ?? 0), 0);

  return (
    <section
      ref={setElement}
      className="relative border-t border-line bg-paper"
      aria-label={t('weekline.label', {
        title,
        ...names,
        from: weekLabel(range.firstWeek),
        until: weekLabel(range.lastWeek),
      })}
    >
      <p className="sr-only">
        {t('weekline.summary', {
          sold: weekline.sold.length,
          units: formatUnits(soldUnits),
          planned: weekline.planned.length,
          plannedUnits: formatUnits(plannedUnits),
          promoted: weekline.promotedWeeks.length,
          locked: weekline.lockedWeeks.length,
          holidays: weekline.holidays.length,
        })}
      </p>
      <div className="absolute top-[5px] left-6 flex items-baseline gap-2">
        <span className="font-display text-[14px]/4 font-[640]">{title}</span>
        <span className="text-tiny text-soft">
          {t(hasLastYear ? 'weekline.captionWithTicks' : 'weekline.caption', names)}
        </span>
        <button type="button" className="act text-tiny" onClick={() => setTableOpen(true)}>
          {t('asTable')}
        </button>
      </div>
      <Band
        weeks={weeks}
        soldWeeks={weekline.sold.length}
        width={width}
        range={range}
        onRangeChange={onRangeChange}
        caption={caption}
      />
      <Dialog
        open={isTableOpen}
        onClose={() => setTableOpen(false)}
        title={t('weekline.tableTitle', { title })}
        lead={t('weekline.caption', names)}
      >
        <WeeksTable weeks={weeks} caption={t('weekline.tableTitle', { title })} />
      </Dialog>
    </section>
  );
}

function WeeksTable({ weeks, caption }: { weeks: BandWeek[]; caption: string }) {
  const { t } = useTranslation('common');
  const figure = (week: BandWeek) => (week.units === null ? t('weekline.unknown') : formatUnits(week.units));
  return (
    <Table caption={caption}>
      <thead>
        <tr>
          <th scope="col">{t('weekline.week')}</th>
          <th scope="col">{t('weekline.starts')}</th>
          <th scope="col" className="num">
            {t('weekline.sold')}
          </th>
          <th scope="col" className="num">
            {t('weekline.planned')}
          </th>
          <th scope="col">{t('weekline.marks')}</th>
        </tr>
      </thead>
      <tbody>
        {weeks.map((week) => (
          <tr key={week.weekStart}>
            <th scope="row">{weekLabel(week.weekStart)}</th>
            <td className="text-soft">{formatLongDate(week.weekStart)}</td>
            <td className="num">{week.isPlanned ? '' : figure(week)}</td>
            <td className="num text-sky">{week.isPlanned ? figure(week) : ''}</td>
            <td>
              {[
                week.isPromoted ? t('weekline.promotion') : '',
                week.isLocked ? t('weekline.locked') : '',
                ...week.holidays,
              ]
                .filter(Boolean)
                .join(', ')}
            </td>
          </tr>
        ))}
      </tbody>
    </Table>
  );
}

interface BandProps {
  weeks: BandWeek[];
  soldWeeks: number;
  width: number;
  range: WeekRange;
  onRangeChange?: (range: WeekRange) => void;
  caption?: string;
}

function Band({ weeks, soldWeeks, width, range, onRangeChange, caption }: BandProps) {
  const { t } = useTranslation('common');
  const firstWeek = weeks[0]?.weekStart ?? '';
  const isNarrow = width < 1440;
  const height = isNarrow ? 66 : 90;
  const left = isNarrow ? 76 : 92;
  const foot = top + height;
  const total = foot + below;
  const pitch = Math.min(14, (width - left - edge) / weeks.length);
  const xOf = (position: number) => Math.round(left + position * pitch);
  const highest = Math.max(1, ...weeks.map((week) => Math.max(week.units ?? 0, week.lastYear ?? 0)));
  const yOf = (units: number) => foot - Math.round((Math.max(0, units) / highest) * (height - 6));
  const [first, last] = toPositions(range, firstWeek, weeks.length);
  const windowLeft = xOf(first);
  const windowRight = xOf(last + 1);
  const seamX = xOf(soldWeeks);

  const threads: string[] = [];
  for (let x = left + 1.5; x < seamX; x += 3) {
    const position = Math.floor((x - left) / pitch);
    const week = weeks[position];
    if (!week || week.units === null || (x >= windowLeft && x < windowRight)) continue;
    threads.push(`M${x} ${foot}V${yOf(week.units) + 1}`);
  }
  const edges: string[] = [];
  const columns = { sold: [] as string[], planned: [] as string[], plannedFar: [] as string[] };
  const ticks: string[] = [];
  const soldShown = Math.max(0, Math.min(last + 1, soldWeeks) - first);
  weeks.forEach((week, position) => {
    const isInside = position >= first && position <= last;
    const x = xOf(position);
    const right = xOf(position + 1);
    if (!week.isPlanned && !isInside) {
      if (week.units === null) return;
      const before = weeks[position - 1];
      const isContinued =
        position > 0 && position - 1 !== last && before?.units !== null && before?.units !== undefined;
      edges.push(`${isContinued ? '' : `M${x} ${foot}`}V${yOf(week.units) + 0.5}H${right}`);
      const after = weeks[position + 1];
      if (!after || after.units === null || after.isPlanned || position + 1 === first) edges.push(`V${foot}`);
      return;
    }
    if (week.units !== null) {
      const gap = pitch >= 4 ? 1 : 0.5;
      const columnWidth = !week.isPlanned && soldShown > 40 ? Math.min(3, right - x - gap) : right - x - gap;
      const path = `M${x + 0.5} ${foot}V${yOf(week.units)}h${Math.max(1, columnWidth)}V${foot}Z`;
      (week.isPlanned ? (isInside ? columns.planned : columns.plannedFar) : columns.sold).push(path);
    }
    if (week.lastYear !== null) ticks.push(`M${x} ${yOf(week.lastYear) + 0.5}H${right - 1}`);
  });

  const sliderOf = (handle: Handle) => ({
    handle,
    weeks,
    positions: [first, last] as [number, number],
    pitch,
    width,
    onMove:
      onRangeChange &&
      ((positions: [number, number]) => onRangeChange(moveRange(range, [first, last], positions, handle))),
  });
  const words = caption ?? t('weekline.shown', { count: weeksBetween(range.firstWeek, range.lastWeek) + 1 });
  const isFlipped = windowRight + handleWidth > width;
  const middle = (windowLeft + windowRight - (isFlipped ? handleWidth + 7 : 0)) / 2;
  const hasRoomForMonths = windowRight - windowLeft > 480;
  const hidden: Span[] = !onRangeChange
    ? []
    : hasRoomForMonths
      ? [
          [windowLeft - handleWidth - 4, windowLeft + 8],
          [middle - 4 * words.length - 16, middle + 4 * words.length + 16],
          [windowRight - (isFlipped ? handleWidth + 11 : 8), windowRight + handleWidth + 4],
        ]
      : [[windowLeft - handleWidth - 4, windowRight + handleWidth + 4]];
  const hasRoomInside = windowRight - windowLeft - (isFlipped ? handleWidth + 7 : 0) > 7 * words.length;

  return (
    <svg
      viewBox={`0 0 ${width} ${total}`}
      width="100%"
      height={total}
      preserveAspectRatio="none"
      className="block touch-none select-none"
      role="group"
    >
      <rect x="0" y={top} width={width} height={height} fill="var(--fold)" />
      <rect x={windowLeft} y={top} width={windowRight - windowLeft} height={height} fill="var(--sheet)" />
      <path d={`M0 ${top - 3.5}H${width}M0 ${top - 0.5}H${width}`} stroke="var(--rule)" strokeWidth=".7" />
      {chooseScaleLines(highest).map((units) => (
        <g key={units} aria-hidden="true">
          <path d={`M${left - 4} ${yOf(units) + 0.5}H${xOf(weeks.length)}`} stroke="var(--line)" />
          <text x={left - 8} y={yOf(units) + 4} textAnchor="end" fontSize="11" fill="var(--soft)">
            {formatUnits(units)}
          </text>
        </g>
      ))}
      <path d={threads.join('')} stroke="var(--sold-far)" />
      <path d={edges.join('')} fill="none" stroke="var(--soft)" />
      <path d={columns.sold.join('')} fill="var(--sold)" />
      <path d={columns.planned.join('')} fill="var(--sky)" />
      <path d={columns.plannedFar.join('')} fill="var(--sky-mid)" />
      <path d={ticks.join('')} stroke="var(--sheet)" strokeWidth="4" />
      <path d={ticks.join('')} stroke="var(--ink)" strokeWidth="1.5" />
      <path d={`M0 ${foot + 0.5}H${width}`} stroke="var(--ink)" />
      <Pennants weeks={weeks} xOf={xOf} first={first} last={last} />
      {findRuns(weeks.length, (position) => weeks[position]?.isLocked ?? false).map(([from, to]) => (
        <rect key={from} x={xOf(from)} y={foot} width={xOf(to + 1) - xOf(from)} height="5" fill="var(--ink)" />
      ))}
      {weeks.map((week, position) =>
        week.holidays.length > 0 ? (
          <path
            key={week.weekStart}
            d={`M${(xOf(position) + xOf(position + 1)) / 2} ${foot - 3.1}l3.6 3.6l-3.6 3.6l-3.6 -3.6Z`}
            fill="var(--ink)"
            stroke="var(--paper)"
          >
            <title>{`${week.holidays.join(', ')}, ${weekLabel(week.weekStart)}`}</title>
          </path>
        ) : null,
      )}
      {soldWeeks > 0 && (
        <g aria-hidden="true">
          <path d={`M${seamX} 4V${foot}`} stroke="var(--paper)" strokeWidth="4" />
          <path d={`M${seamX} 5V${foot + 1}`} stroke="var(--ink)" strokeWidth="2" strokeDasharray="6 3" />
          <text x={seamX - 7} y="14" textAnchor="end" fontSize="11" fontWeight="600" fill="var(--ink)">
            {t('weekline.soldTo', { week: shortWeekLabel(weeks[soldWeeks - 1]?.weekStart ?? firstWeek) })}
          </text>
          {soldWeeks < weeks.length && width - seamX > 114 && (
            <text x={seamX + 7} y="14" fontSize="11" fontWeight="600" fill="var(--ink)">
              {t('weekline.plannedFrom', { week: shortWeekLabel(weeks[soldWeeks]?.weekStart ?? firstWeek) })}
            </text>
          )}
        </g>
      )}
      {onRangeChange ? (
        <>
          <Slider {...sliderOf('both')} label={t('weekline.move')}>
            <rect x={windowLeft} y={foot + 7.5} width={windowRight - windowLeft} height="19" fill="var(--paper)" />
            <path
              d={`M${windowLeft} ${foot + 7.5}H${windowRight}M${windowLeft} ${foot + 26.5}H${windowRight}`}
              stroke="var(--moss)"
            />
            {hasRoomInside && (
              <text x={middle} y={foot + 21} textAnchor="middle" fontSize="11" fill="var(--ink)">
                {words}
              </text>
            )}
          </Slider>
          <Slider {...sliderOf('first')} label={t('weekline.firstShown')}>
            <HandleShape x={windowLeft} side="first" foot={foot} label={shortWeekLabel(range.firstWeek)} />
          </Slider>
          <Slider {...sliderOf('last')} label={t('weekline.lastShown')}>
            <HandleShape
              x={windowRight}
              side="last"
              foot={foot}
              label={shortWeekLabel(range.lastWeek)}
              flip={isFlipped}
            />
          </Slider>
        </>
      ) : (
        <path d={`M${windowLeft} ${top}V${foot}M${windowRight} ${top}V${foot}`} stroke="var(--rule)" />
      )}
      <Months weeks={weeks} xOf={xOf} foot={foot} hidden={hidden} />
    </svg>
  );
}

interface SliderProps {
  handle: Handle;
  label: string;
  weeks: BandWeek[];
  positions: [number, number];
  pitch: number;
  width: number;
  onMove?: (positions: [number, number]) => void;
  children: ReactNode;
}

/** One handle, or the run between them: dragged, or moved by the arrow keys, Page Up and Down, Home and End. */
function Slider({ handle, label, weeks, positions, pitch, width, onMove, children }: SliderProps) {
  const { t } = useTranslation('common');
  const drag = useRef<{ startX: number; start: [number, number] } | null>(null);
  if (!onMove) return <g>{children}</g>;
  const [first, last] = positions;
  const move = (start: [number, number], by: number) => {
    const next = moveHandle(start, handle, by, weeks.length);
    if (next[0] !== first || next[1] !== last) onMove(next);
  };
  const nameOf = (position: number) => weekLabel(weeks[position]?.weekStart ?? '');
  return (
    <g
      role="slider"
      tabIndex={0}
      className={handle === 'both' ? 'cursor-grab' : 'cursor-ew-resize'}
      aria-label={label}
      aria-valuemin={0}
      aria-valuemax={weeks.length - 1}
      aria-valuenow={handle === 'last' ? last : first}
      aria-valuetext={
        handle === 'both' ? `${nameOf(first)} ${t('to')} ${nameOf(last)}` : nameOf(handle === 'last' ? last : first)
      }
      onKeyDown={(event) => {
        const step = stepOfKey(event.key, weeks.length);
        if (step === null) return;
        event.preventDefault();
        move(positions, step);
      }}
      onPointerDown={(event) => {
        event.currentTarget.setPointerCapture(event.pointerId);
        drag.current = { startX: event.clientX, start: positions };
      }}
      onPointerMove={(event) => {
        const shownWidth = event.currentTarget.ownerSVGElement?.getBoundingClientRect().width;
        if (!drag.current || !shownWidth) return;
        move(drag.current.start, Math.round(((event.clientX - drag.current.startX) * width) / shownWidth / pitch));
      }}
      onPointerUp={() => {
        drag.current = null;
      }}
      onPointerCancel={() => {
        drag.current = null;
      }}
    >
      {children}
    </g>
  );
}

function HandleShape({
  x,
  side,
  foot,
  label,
  flip = false,
}: {
  x: number;
  side: 'first' | 'last';
  foot: number;
  label: string;
  /** At the window's rim the flag hangs inwards. */
  flip?: boolean;
}) {
  const outward = (side === 'last') !== flip ? 1 : -1;
  const reach = outward * handleWidth;
  const notch = -outward * 7;
  return (
    <>
      <rect x={x - 6} y={24} width="12" height={foot - 20} fill="transparent" />
      <path d={`M${x} ${foot + 7}v20h${reach}l${notch} -10l${-notch} -10Z`} fill="var(--moss)" />
      <path d={`M${x} 30V${foot + 8}`} stroke="var(--moss)" strokeWidth="2" />
      <circle cx={x} cy="30" r="3" fill="var(--moss)" />
      <text
        x={x + outward * 9}
        y={foot + 21.5}
        textAnchor={outward > 0 ? 'start' : 'end'}
        fontSize="12"
        fontWeight="640"
        fill="var(--on-moss)"
      >
        {label}
      </text>
    </>
  );
}

function Pennants({
  weeks,
  xOf,
  first,
  last,
}: {
  weeks: BandWeek[];
  xOf: (position: number) => number;
  first: number;
  last: number;
}) {
  return findRuns(weeks.length, (position) => weeks[position]?.isPromoted ?? false).map(([from, to]) => {
    const isInside = to >= first && from <= last;
    const x = xOf(from);
    const end = xOf(to + 1);
    const length = Math.max(9, Math.min(36, end - x));
    return (
      <g key={from} aria-hidden="true">
        <path
          d={`M${x + 0.5} 22L${x + length} 26.5L${x + 0.5} 31Z`}
          fill={isInside ? 'var(--pennant)' : 'var(--turmeric-tint)'}
          stroke="var(--turmeric)"
          strokeWidth=".8"
          strokeLinejoin="round"
        />
        <path d={`M${x} 21V36`} stroke="var(--turmeric)" strokeWidth="1.2" />
        {end > x + length && <path d={`M${x} 34.2H${end - 1}`} stroke="var(--turmeric)" strokeWidth="1.2" />}
      </g>
    );
  });
}

/** Year where it begins, else the month's letter, where neither stands on another or under a handle. */
function Months({
  weeks,
  xOf,
  foot,
  hidden,
}: {
  weeks: BandWeek[];
  xOf: (position: number) => number;
  foot: number;
  /** Where handles and words stand. */
  hidden: Span[];
}) {
  const marks: { x: number; text: string; isYear: boolean }[] = [];
  let room = -Infinity;
  weeks.forEach((week, position) => {
    const day = addDays(week.weekStart, 3);
    const before = position > 0 ? addDays(week.weekStart, -4) : null;
    const isYear = before === null || before.slice(0, 4) !== day.slice(0, 4);
    if (!isYear && before.slice(0, 7) === day.slice(0, 7)) return;
    const x = xOf(position);
    if (!isYear && x < room) return;
    if (isYear && x < room) marks.pop();
    marks.push({ x, text: isYear ? day.slice(0, 4) : formatMonthLetter(day), isYear });
    room = x + (isYear ? 40 : 18);
  });
  const rim = xOf(weeks.length) + edge;
  return marks.map(({ x, text, isYear }) => (
    <g key={`${x}-${text}`} aria-hidden="true" pointerEvents="none">
      {isYear && x > xOf(0) && <path d={`M${x + 0.5} 40V${foot}`} stroke="var(--rule)" strokeDasharray="1 3" />}
      {x + (isYear ? 34 : 12) <= rim && hidden.every(([from, to]) => x + (isYear ? 32 : 10) < from || x > to) && (
        <text
          x={x + (isYear ? 2 : 0)}
          y={foot + 17}
          fontSize={isYear ? 12 : 11}
          fontWeight={isYear ? 640 : 400}
          fill={isYear ? 'var(--ink)' : 'var(--soft)'}
        >
          {text}
        </text>
      )}
    </g>
  ));
}

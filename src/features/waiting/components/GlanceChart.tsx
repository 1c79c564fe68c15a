import { useTranslation } from 'react-i18next';
import { addWeeks, shortWeekLabel } from '../../../../shared/domain/weeks.ts';
import { chooseScaleLines } from '../../../components/weekline-geometry.ts';
import { formatUnits } from '../../../lib/format.ts';
import type { GlanceWeek } from '../glance.ts';

const width = 544;
const left = 50;
const top = 30;
const foot = 196;

/** Columns sold and planned with last year as a dotted line. The lines' table below and the weekline's table say the same in figures. */
export function GlanceChart({
  weeks,
  firstWeek,
  lockedWeeks,
  label,
}: {
  weeks: GlanceWeek[];
  firstWeek: string;
  lockedWeeks: string[];
  label: string;
}) {
  const { t } = useTranslation('waiting');
  const pitch = Math.min(26, (width - left) / Math.max(1, weeks.length));
  const highest = Math.max(1, ...weeks.flatMap((week) => [week.units ?? 0, week.lastYear ?? 0]));
  const yOf = (units: number) => foot - (units / highest) * (foot - top - 4);
  const xOf = (position: number) => left + position * pitch;
  const soldWeeks = weeks.filter((week) => !week.isPlanned).length;
  const locked = new Set(lockedWeeks);
  let lastYear = '';
  weeks.forEach((week, position) => {
    if (week.lastYear === null) return;
    const isContinued = position > 0 && weeks[position - 1]?.lastYear !== null;
    lastYear += `${isContinued ? 'L' : 'M'}${xOf(position) + pitch / 2} ${yOf(week.lastYear)}`;
  });
  const lastKnown = weeks.findLastIndex((week) => week.lastYear !== null);
  const labelTop = Math.min(
    ...weeks
      .slice(Math.max(0, lastKnown - 2), lastKnown + 1)
      .map((week) => yOf(Math.max(week.lastYear ?? 0, week.units ?? 0))),
  );
  const seamX = xOf(soldWeeks);
  return (
    <svg viewBox={`0 0 ${width} 218`} className="block w-full" role="img" aria-label={label}>
      {chooseScaleLines(highest).map((units) => (
        <g key={units}>
          <path d={`M${left} ${yOf(units)}H${width}`} stroke="var(--line)" />
          <text x={left - 8} y={yOf(units) + 4} textAnchor="end" fontSize="11" fill="var(--soft)">
            {formatUnits(units)}
          </text>
        </g>
      ))}
      {weeks.map((week, position) =>
        week.units === null ? null : (
          <rect
            key={position}
            x={xOf(position) + pitch * 0.16}
            y={yOf(week.units)}
            width={pitch * 0.68}
            height={foot - yOf(week.units)}
            fill={week.isPlanned ? 'var(--sky)' : 'var(--sold)'}
          />
        ),
      )}
      <path d={lastYear} fill="none" stroke="var(--paper)" strokeWidth="3.5" />
      <path d={lastYear} fill="none" stroke="var(--ink)" strokeWidth="1.6" strokeDasharray="2 2.5" />
      {lastKnown >= 0 && (
        <text x={xOf(lastKnown + 1)} y={labelTop - 7} textAnchor="end" fontSize="11" fill="var(--ink)">
          {t('glance.lastYear')}
        </text>
      )}
      <path d={`M${left} ${foot + 0.5}H${width}`} stroke="var(--ink)" />
      {weeks.map((week, position) =>
        week.isPlanned && locked.has(addWeeks(firstWeek, position)) ? (
          <rect key={position} x={xOf(position)} y={foot} width={pitch} height="5" fill="var(--ink)" />
        ) : null,
      )}
      {weeks.map((_, position) =>
        position % 2 === 0 ? (
          <text
            key={position}
            x={xOf(position) + pitch / 2}
            y={foot + 18}
            textAnchor="middle"
            fontSize="11"
            fill="var(--soft)"
          >
            {shortWeekLabel(addWeeks(firstWeek, position)).slice(1)}
          </text>
        ) : null,
      )}
      {soldWeeks > 0 && soldWeeks < weeks.length && (
        <>
          <path d={`M${seamX} 4V${foot}`} stroke="var(--ink)" strokeWidth="2" strokeDasharray="6 3" />
          <text x={seamX - 8} y="14" textAnchor="end" fontSize="11" fontWeight="600" fill="var(--ink)">
            {t('glance.sold')}
          </text>
          <text x={seamX + 8} y="14" fontSize="11" fontWeight="600" fill="var(--sky)">
            {t('glance.plan')}
          </text>
        </>
      )}
    </svg>
  );
}

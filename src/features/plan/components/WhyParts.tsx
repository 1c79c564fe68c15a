import { useQuery } from '@tanstack/react-query';
import { useTranslation } from 'react-i18next';
import type { LastPromotion, LinePlan, OverrideInForce, WhyNumber } from '../../../../shared/contracts/plan.ts';
import { EmptyState, QueryStates } from '../../../components/states.tsx';
import { ProblemError } from '../../../lib/api.ts';
import { formatFactor, formatNumber, formatPercent, formatSigned, formatWeekSpan } from '../../../lib/format.ts';
import type { GridRow } from '../grid-rows.ts';
import { whyQuery } from '../why-query.ts';
import { listWhyRows, type WhyRow } from '../why-rows.ts';

interface WhyPartsProps {
  plan: LinePlan;
  row: GridRow;
  weekStart: string;
  /** The number on screen: with changes that aren't saved, or of an earlier version. NaN where it can't be told. */
  shownPlan: number;
  hasUnsaved: boolean;
  /** Names of the promotions of the week under this number. */
  promotions: readonly string[];
  lockedIn: number | string | null;
}

/** The parts of a planned number as the server tells them, from the level to the plan, and what its promotion did the last time. */
export function WhyParts(props: WhyPartsProps) {
  const { plan, row, weekStart } = props;
  const { t } = useTranslation('plan');
  const query = useQuery(whyQuery(plan.line.id, plan.version?.number ?? 0, row.scope, weekStart));
  if (query.error instanceof ProblemError && query.error.type === 'no-forecast') {
    return <EmptyState title={t('why.noForecast')}>{query.error.detail}</EmptyState>;
  }
  return (
    <QueryStates query={query} loading={t('why.readingParts')}>
      {(why) => <Parts {...props} why={why} />}
    </QueryStates>
  );
}

function Parts({ plan, row, shownPlan, hasUnsaved, promotions, lockedIn, why }: WhyPartsProps & { why: WhyNumber }) {
  const { t } = useTranslation('plan');
  const held = Number.isNaN(shownPlan) ? why.plan : shownPlan;
  const isMovedSince = Math.abs(held - why.plan) > 1e-9;
  const rows = listWhyRows(why, { shownPlan: held, isEarlier: isMovedSince && !hasUnsaved });
  const scale = createScale(rows);
  const overrides = new Map(plan.overrides.map((override) => [override.id, override]));
  const isOverridden = Math.abs(held - why.model) > 1e-9;
  return (
    <>
      <table className="plan-parts">
        <caption className="sr-only">{t('why.parts')}</caption>
        <thead>
          <tr>
            <th scope="col">{t('why.part')}</th>
            <th scope="col" className="num">
              {t('why.factor')}
            </th>
            <th aria-hidden="true" />
            <th scope="col" className="num">
              {t('why.units')}
            </th>
          </tr>
        </thead>
        <tbody>
          {rows.map((part) => (
            <PartRow
              key={part.key}
              part={part}
              scale={scale}
              override={overrides.get(part.overrideId ?? 0) ?? null}
              rowScope={row.scope}
              lockedIn={lockedIn}
            />
          ))}
        </tbody>
        <tfoot>
          <tr>
            <th scope="row" colSpan={3}>
              {t('why.plan')}
            </th>
            <td className="num">
              <span className={isOverridden ? 'over' : ''}>{Number.isNaN(shownPlan) ? '–' : formatNumber(held)}</span>
            </td>
          </tr>
        </tfoot>
      </table>
      <div className="mt-2 flex flex-col gap-1 text-small">
        <Inclusion units={why.uplift.units} promotions={promotions} model={why.model} />
        {why.lastPromotion && <LastTime last={why.lastPromotion} />}
      </div>
    </>
  );
}

/** What the model already holds for promotions, so that nobody adds it twice. */
function Inclusion({ units, promotions, model }: { units: number; promotions: readonly string[]; model: number }) {
  const { t } = useTranslation('plan');
  const digits = model < 100 ? 1 : 0;
  if (Number(units.toFixed(digits)) === 0) return null;
  if (promotions.length === 0) return <p>{t('why.around')}</p>;
  const names = promotions.slice(0, 3).join(', ');
  return (
    <p>
      <b className="text-turmeric">{t('why.includes', { units: formatSigned(units, digits) })}</b>{' '}
      {promotions.length > 3
        ? t('why.includesForMore', { names, count: promotions.length - 3 })
        : t('why.includesFor', { names })}
    </p>
  );
}

function LastTime({ last }: { last: LastPromotion }) {
  const { t } = useTranslation('plan');
  const { unitsAWeek, ordinaryUnitsAWeek, depth } = last;
  const digits = unitsAWeek < 100 ? 1 : 0;
  const terms = [
    depth === null ? null : t('why.depth', { depth: formatPercent(depth, 0) }),
    last.isFeatured ? t('why.feature') : null,
    last.isDisplayed ? t('why.display') : null,
  ].filter(Boolean);
  return (
    <p className="text-soft">
      {t('why.lastTime', { weeks: formatWeekSpan(last.firstWeek, last.lastWeek) })}
      {terms.length > 0 && ` (${terms.join(', ')})`}:{' '}
      {ordinaryUnitsAWeek === null || ordinaryUnitsAWeek <= 0
        ? t('why.lastUnits', { units: formatNumber(unitsAWeek, digits) })
        : t('why.lastAgainst', {
            units: formatNumber(unitsAWeek, digits),
            ordinary: formatNumber(ordinaryUnitsAWeek, digits),
            factor: formatFactor(unitsAWeek / ordinaryUnitsAWeek),
          })}
    </p>
  );
}

const barWidth = 82;

/** Units to pixels: from the lowest running total, or zero, to the highest. */
function createScale(rows: readonly WhyRow[]): (units: number) => number {
  const ends = rows.flatMap(({ from, to }) => [from, to]);
  const least = Math.min(0, ...ends);
  const span = Math.max(0, ...ends) - least || 1;
  return (units) => 0.5 + ((units - least) / span) * (barWidth - 1.5);
}

const colours: Record<WhyRow['group'], string> = {
  base: 'sky',
  uplift: 'pennant',
  rounding: 'rule',
  model: 'sky',
  override: 'plum',
  held: 'ink',
  unsaved: 'plum',
};
const textColours: Partial<Record<WhyRow['group'], string>> = {
  uplift: 'text-turmeric',
  model: 'text-sky',
  override: 'text-plum',
  unsaved: 'text-plum',
};

function PartRow({
  part,
  scale,
  override,
  rowScope,
  lockedIn,
}: {
  part: WhyRow;
  scale: (units: number) => number;
  override: OverrideInForce | null;
  rowScope: GridRow['scope'];
  lockedIn: number | string | null;
}) {
  const { t } = useTranslation('plan');
  const { group, kind, shown } = part;
  const isSum = kind !== 'part';
  const isLevel = part.part === 'level';
  const label = (): string => {
    if (part.part !== null) return t(`why.partNames.${part.part}`);
    if (group === 'override') return override ? t('why.overrideBy', { author: override.author }) : t('why.overrides');
    if (group === 'held') return t('why.held', { version: lockedIn ?? '–' });
    return t(`why.sums.${group}`);
  };
  const isOfThisRow = override?.scope.itemId === rowScope.itemId && override.scope.locationId === rowScope.locationId;
  const factor = (): string => {
    if (group === 'model') return t('why.mean');
    if (part.factor !== null) return formatFactor(part.factor);
    if (override?.operation === 'scale by') return formatFactor(override.value ?? 1);
    if (override?.operation === 'set to' && isOfThisRow) return `= ${formatNumber(override.value ?? 0)}`;
    return '';
  };
  const digits = Number.isInteger(shown) ? 0 : 1;
  const isChange = !isLevel && (kind === 'part' || group === 'uplift');
  const textColour = isSum || group === 'override' || group === 'unsaved' ? (textColours[group] ?? '') : '';
  return (
    <tr className={isSum ? 'is-sum' : ''}>
      <th scope="row" className={`${isSum ? '' : 'is-part'} ${textColour}`}>
        {label()}
      </th>
      <td className="num text-soft">{factor()}</td>
      <td aria-hidden="true">
        <Bar from={scale(part.from)} to={scale(part.to)} colour={colours[group]} isTotal={isSum || isLevel} />
      </td>
      <td className={`num ${textColour}`}>{isChange ? formatSigned(shown, digits) : formatNumber(shown, 1)}</td>
    </tr>
  );
}

/** From where the part before ended; what takes away is hollow. A hairline leads on to the next part. */
function Bar({ from, to, colour, isTotal }: { from: number; to: number; colour: string; isTotal: boolean }) {
  const left = Math.min(from, to);
  const width = Math.max(1, Math.abs(to - from));
  const top = isTotal ? 4 : 6;
  const height = 20 - 2 * top;
  return (
    <svg width={barWidth} height="20">
      {to < from ? (
        <rect
          x={left + 0.5}
          y={top + 0.5}
          width={Math.max(1, width - 1)}
          height={height - 1}
          fill="var(--sheet)"
          stroke={`var(--${colour})`}
        />
      ) : (
        <rect x={left} y={top} width={width} height={height} fill={`var(--${colour})`} />
      )}
      <path
        d={isTotal ? `M${to} ${20 - top}V21` : `M${to} ${20 - top}V21M${from} 0V${top}`}
        stroke="var(--rule)"
        strokeWidth=".8"
      />
    </svg>
  );
}

import { useQueries, useQuery } from '@tanstack/react-query';
import { useState } from 'react';
import { useTranslation } from 'react-i18next';
import type { LinePlan } from '../../../../shared/contracts/plan.ts';
import { scopeHolds, scopesMeet } from '../../../../shared/domain/override-arithmetic.ts';
import { weeksBetween } from '../../../../shared/domain/weeks.ts';
import { Button } from '../../../components/Button.tsx';
import { CloseButton } from '../../../components/CloseButton.tsx';
import { BeyondMark, ForkMark, PennantMark, RingMark } from '../../../components/marks.tsx';
import {
  formatFactor,
  formatInstant,
  formatMoney,
  formatNumber,
  formatPercent,
  formatSigned,
  formatWeekDates,
  shortWeekLabel,
  weekLabel,
} from '../../../lib/format.ts';
import { useCurrency } from '../../../lib/settings.ts';
import type { GridColumn } from '../grid-columns.ts';
import type { GridRow } from '../grid-rows.ts';
import { findRange, listBeyondSeen, rowOfVersion, type LineFigures, type RowFigures } from '../line-figures.ts';
import type { PendingEdit } from '../pending-edits.ts';
import { versionsQuery, versionStateQuery } from '../queries.ts';
import { RangeDrawing } from './RangeDrawing.tsx';
import { WhyParts } from './WhyParts.tsx';

const mostEarlier = 8;

interface WhyDrawerProps {
  plan: LinePlan;
  row: GridRow;
  name: string;
  column: GridColumn;
  figures: RowFigures;
  lineFigures: LineFigures;
  pending: readonly PendingEdit[];
  describeScope: (scope: { itemId: number | null; locationId: number | null }) => string;
  onClose: () => void;
}

/** Where the number of one cell comes from: its parts, the model's range, promotions, overrides and earlier values. */
export function WhyDrawer(props: WhyDrawerProps) {
  const { column, figures, name, onClose } = props;
  const { t } = useTranslation('plan');
  const { t: common } = useTranslation('common');
  const value = column.kind === 'history' ? (figures.history[column.index] ?? null) : (figures.plan[column.index] ?? 0);
  const figure = value === null || Number.isNaN(value) ? '–' : formatNumber(value);
  return (
    <aside aria-label={t('why.label')} className="plan-drawer">
      <div className="flex items-start justify-between">
        <h2 className="text-[20px]/6">
          {column.kind === 'plan' ? t('why.title', { figure }) : t('why.sold', { figure })}
        </h2>
        <CloseButton label={common('close')} onClick={onClose} />
      </div>
      <p className="text-small text-soft">
        {name}, {weekLabel(column.weekStart)}, {formatWeekDates(column.weekStart)}
      </p>
      {column.kind === 'plan' ? (
        <PlannedCell key={`${props.row.key}/${column.weekStart}`} {...props} />
      ) : (
        <SoldCell {...props} />
      )}
    </aside>
  );
}

function SoldCell({ plan, row, column, figures }: WhyDrawerProps) {
  const { t } = useTranslation('plan');
  const gaps = figures.gaps[column.index] ?? 0;
  const lastYear = figures.history[column.index - 52];
  return (
    <div className="mt-3 flex flex-col gap-2 text-small">
      {figures.history[column.index] === null && <p>{t('why.nothingKnown')}</p>}
      {gaps > 0 && (
        <p>
          {row.seriesIndexes.length === 1
            ? t('why.gapOne')
            : t('why.gap', { count: gaps, of: row.seriesIndexes.length })}
        </p>
      )}
      {lastYear !== undefined && lastYear !== null && <p>{t('why.lastYear', { units: formatNumber(lastYear) })}</p>}
      <Promotions plan={plan} row={row} weekStart={column.weekStart} />
    </div>
  );
}

function PlannedCell({ plan, row, column, figures, lineFigures, pending, describeScope }: WhyDrawerProps) {
  const { t } = useTranslation('plan');
  const currency = useCurrency();
  const week = column.index;
  const series = row.seriesIndexes.flatMap((index) => plan.series[index] ?? []);
  const sum = (values: (number | null | undefined)[]) => values.reduce<number>((total, each) => total + (each ?? 0), 0);
  const model = figures.model[week] ?? 0;
  const held = figures.plan[week] ?? 0;
  const lastYears = series.map((each) => each.lastYear[week]);
  const lastYear = lastYears.some((each) => each !== null && each !== undefined) ? sum(lastYears) : null;
  const range = findRange(plan, row);
  const marks = figures.marks[week];
  const averaged = series.filter(({ method }) => method === 'simple-average').length;
  const prices = series.map((each) => each.price[week]);
  const hasPrices = prices.length > 0 && prices.every((price) => price !== null && price !== undefined);
  const netValue = hasPrices
    ? sum(row.seriesIndexes.map((index, at) => (lineFigures.plan[index]?.[week] ?? 0) * (prices[at] ?? 0)))
    : null;
  const inForce = plan.overrides.filter(
    (override) =>
      override.operation !== 'clear' &&
      override.firstWeek <= column.weekStart &&
      override.lastWeek >= column.weekStart &&
      scopesMeet(override.scope, row.scope),
  );
  const own = inForce.filter((override) => scopeHolds(override.scope, row.scope));
  const under = inForce.filter((override) => !scopeHolds(override.scope, row.scope));
  const unsaved = pending.filter(
    (edit) =>
      edit.firstWeek <= column.weekStart && edit.lastWeek >= column.weekStart && scopesMeet(edit.scope, row.scope),
  );
  return (
    <>
      <WhyParts
        plan={plan}
        row={row}
        weekStart={column.weekStart}
        shownPlan={held}
        hasUnsaved={unsaved.length > 0}
        promotions={[...new Set(findPromotions(plan, row, column.weekStart).map(({ name: promotion }) => promotion))]}
        lockedIn={column.isLocked ? lockVersion(plan, column.weekStart) : null}
      />

      <div className="mt-2 flex flex-col gap-1 text-small">
        {column.isLocked && <p>{t('why.locked', { version: lockVersion(plan, column.weekStart) })}</p>}
        {unsaved.length > 0 && <p className="text-plum">{t('why.unsaved', { count: unsaved.length })}</p>}
        {marks?.isOutsideRange && (
          <p>
            <ForkMark /> {t('why.outside')}
          </p>
        )}
        {listBeyondSeen(plan, row, week).map((kind) => (
          <p key={kind}>
            <BeyondMark /> {t(`why.beyond.${kind}`)}
          </p>
        ))}
        {netValue !== null && (
          <p className="text-soft">{t('why.netValue', { value: formatMoney(netValue, currency, 0) })}</p>
        )}
        {averaged > 0 && (
          <p className="border-l-2 border-turmeric pl-2">
            {series.length === 1 ? t('why.averageOne') : t('why.average', { count: averaged, of: series.length })}
          </p>
        )}
        <Promotions plan={plan} row={row} weekStart={column.weekStart} />
      </div>

      <h3 className="mt-3 text-[14px]/[18px]">{t('why.range')}</h3>
      {range ? (
        <>
          <RangeDrawing
            low95={range.p2_5[week] ?? 0}
            low80={range.p10[week] ?? 0}
            high80={range.p90[week] ?? 0}
            high95={range.p97_5[week] ?? 0}
            model={model}
            plan={Number.isNaN(held) ? model : held}
            lastYear={lastYear}
          />
          <p className="mt-1 text-small text-soft">
            {t('why.median')} <b className="text-ink">{formatNumber(range.p50[week] ?? 0, 0)}</b>
          </p>
        </>
      ) : (
        <p className="text-small text-soft">
          {t('why.noRange')} {lastYear !== null && t('why.lastYear', { units: formatNumber(lastYear) })}
        </p>
      )}

      <h3 className="mt-3 text-[14px]/[18px]">{t('why.inForce')}</h3>
      {inForce.length === 0 && <p className="text-small text-soft">{t('why.noOverride')}</p>}
      <ul>
        {[...own, ...under.slice(-6)].map((override) => {
          const baseModel = override.baseModel[weeksBetween(override.firstWeek, column.weekStart)];
          return (
            <li key={override.id} className="border-t border-line py-1.5 text-small">
              <span className="flex justify-between gap-2">
                <span>
                  <b>{override.author}</b> {describeOperation(t, override.operation, override.value)}
                  {override.firstWeek !== override.lastWeek &&
                    `, ${shortWeekLabel(override.firstWeek)}–${shortWeekLabel(override.lastWeek)}`}
                </span>
                <span className="num text-soft">
                  {t('why.versionShort', { number: override.version })}
                  <br />
                  {formatInstant(override.at)}
                </span>
              </span>
              {(override.scope.itemId !== row.scope.itemId || override.scope.locationId !== row.scope.locationId) && (
                <span className="block text-soft">{t('why.on', { scope: describeScope(override.scope) })}</span>
              )}
              {(override.reason ?? override.note) && (
                <span className="block text-soft italic">
                  {[override.reason, override.note].filter(Boolean).join(': ')}
                </span>
              )}
              {override.needsDecision !== null && (
                <span className="block text-madder">
                  <span className="plan-decision" aria-hidden="true">
                    !
                  </span>{' '}
                  {t('why.decision')} {override.needsDecision}
                </span>
              )}
              {override.isDueAnotherLook && (
                <span className="block text-plum">
                  <RingMark /> {t('why.look')}
                  {baseModel !== undefined && ` ${t('why.lookFrom', { before: formatNumber(baseModel) })}`}
                </span>
              )}
            </li>
          );
        })}
      </ul>
      {under.length > 6 && <p className="text-small text-soft">{t('why.moreUnder', { count: under.length - 6 })}</p>}
      <EarlierValues plan={plan} row={row} weekStart={column.weekStart} />
      <p className="mt-3 border-t border-line pt-2 text-tiny text-soft">
        {plan.run && t('why.caution', { week: weekLabel(plan.run.salesTo) })}
      </p>
    </>
  );
}

function findPromotions(plan: LinePlan, row: GridRow, weekStart: string) {
  const series = row.seriesIndexes.flatMap((index) => plan.series[index] ?? []);
  return plan.promotions.filter(
    (promotion) =>
      promotion.firstWeek <= weekStart &&
      promotion.lastWeek >= weekStart &&
      series.some(
        ({ itemId, locationId }) => promotion.itemIds.includes(itemId) && promotion.locationIds.includes(locationId),
      ),
  );
}

function lockVersion(plan: LinePlan, weekStart: string): number | string {
  return plan.locks.find(({ firstWeek, lastWeek }) => weekStart >= firstWeek && weekStart <= lastWeek)?.version ?? '–';
}

/** `set to 240`, `+12`, `× 1.05` in words. */
export function describeOperation(
  t: (key: string, values?: Record<string, unknown>) => string,
  operation: string,
  value: number | null,
): string {
  if (operation === 'set to') return t('operation.didSetTo', { value: formatNumber(value ?? 0) });
  if (operation === 'add') return t('operation.didAdd', { value: formatSigned(value ?? 0) });
  if (operation === 'scale by') return t('operation.didScaleBy', { value: formatFactor(value ?? 1) });
  return t('operation.didClear');
}

function Promotions({ plan, row, weekStart }: { plan: LinePlan; row: GridRow; weekStart: string }) {
  const { t } = useTranslation('plan');
  const promotions = findPromotions(plan, row, weekStart);
  if (promotions.length === 0) return null;
  return (
    <>
      <ul>
        {promotions.slice(0, 4).map((promotion, index) => {
          const facts = [
            promotion.depth !== null && promotion.depth > 0
              ? t('why.depth', { depth: formatPercent(promotion.depth, 0) })
              : null,
            promotion.feature > 0 ? t('why.feature') : null,
            promotion.display > 0 ? t('why.display') : null,
            ...Object.keys(promotion.mechanics).filter((mechanic) => (promotion.mechanics[mechanic] ?? 0) > 0),
          ].filter(Boolean);
          return (
            <li key={index} className="flex gap-1.5">
              <span className="pt-0.5">
                <PennantMark />
              </span>
              <span>
                {promotion.name}
                {facts.length > 0 && <span className="text-soft">, {facts.join(', ')}</span>}
              </span>
            </li>
          );
        })}
      </ul>
    </>
  );
}

/** What the cell held in earlier versions, read only when asked for: each version is the whole line. */
function EarlierValues({ plan, row, weekStart }: { plan: LinePlan; row: GridRow; weekStart: string }) {
  const { t } = useTranslation('plan');
  const [isAsked, setAsked] = useState(false);
  const lineId = plan.line.id;
  const { data } = useQuery({ ...versionsQuery(lineId), refetchInterval: false });
  const newest = (data?.versions ?? []).toSorted((a, b) => b.number - a.number).slice(0, mostEarlier);
  const states = useQueries({
    queries: newest.map(({ number }) => ({ ...versionStateQuery(lineId, number), enabled: isAsked })),
  });
  const values = states.flatMap((state) => {
    if (!state.data) return [];
    const units = rowOfVersion(state.data, plan, row).get(weekStart);
    return units === undefined ? [] : [{ version: state.data.version, units }];
  });
  const distinct = values.filter(({ units }, index) => values[index + 1]?.units !== units);
  return (
    <>
      <h3 className="mt-3 text-[14px]/[18px]">{t('why.earlier')}</h3>
      {!isAsked ? (
        <Button variant="text" className="!text-small" onClick={() => setAsked(true)}>
          {t('why.showEarlier')}
        </Button>
      ) : states.some((state) => state.isPending) ? (
        <p role="status" className="text-small text-soft">
          {t('why.readingEarlier')}
        </p>
      ) : (
        <ol>
          {distinct.map(({ version, units }) => (
            <li
              key={version.number}
              className="grid grid-cols-[48px_1fr_auto] gap-x-2.5 border-t border-line py-1 text-small"
            >
              <span className={`num ${version.kind === 'forecast' ? 'text-sky' : 'text-plum'}`}>
                {formatNumber(units)}
              </span>
              <span>
                <b>{version.author}</b> <span className="text-soft">{t(`versions.kind.${version.kind}`)}</span>
                {version.reason && <span className="block text-soft italic">{version.reason}</span>}
              </span>
              <span className="num text-soft">
                {t('why.versionShort', { number: version.number })}
                <br />
                {formatInstant(version.at)}
              </span>
            </li>
          ))}
        </ol>
      )}
    </>
  );
}

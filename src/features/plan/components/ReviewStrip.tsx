import { useState } from 'react';
import { useTranslation } from 'react-i18next';
import type { LinePlan, VersionState } from '../../../../shared/contracts/plan.ts';
import { Table } from '../../../components/Table.tsx';
import { formatInstant, formatNumber, formatSigned, formatSignedPercent, shortWeekLabel } from '../../../lib/format.ts';
import type { GridRow } from '../grid-rows.ts';
import { planWeekStarts, rowOfVersion, type RowFigures } from '../line-figures.ts';
import { findMovers } from '../movers.ts';

/** What a submitted line changed, for who has to answer: by week and by row, against the last lock or against the model. */
export function ReviewStrip({
  plan,
  rows,
  figures,
  names,
  locked,
}: {
  plan: LinePlan;
  rows: readonly GridRow[];
  figures: readonly RowFigures[];
  names: readonly string[];
  locked: VersionState | null;
}) {
  const { t } = useTranslation('plan');
  const [isAgainstLock, setAgainstLock] = useState(true);
  const usesLock = locked !== null && isAgainstLock;
  const weeks = planWeekStarts(plan);
  const before = rows.map((row, position) => {
    if (usesLock) return rowOfVersion(locked, plan, row);
    return new Map(weeks.map((week, index) => [week, figures[position]?.model[index] ?? 0]));
  });
  const total = rows.length - 1;
  const compared = weeks.flatMap((week, index) => {
    const was = before[total]?.get(week);
    return was === undefined ? [] : [{ week, index, was, now: figures[total]?.plan[index] ?? 0 }];
  });
  const sum = (position: number, of: 'was' | 'now') =>
    compared.reduce(
      (units, { week, index }) =>
        units + (of === 'was' ? (before[position]?.get(week) ?? 0) : (figures[position]?.plan[index] ?? 0)),
      0,
    );
  const { movers, rest, largestOfRest } = findMovers(
    rows.slice(0, -1).map(({ key }, position) => ({
      key,
      name: names[position] ?? '',
      before: sum(position, 'was'),
      now: sum(position, 'now'),
    })),
    6,
  );
  const was = sum(total, 'was');
  const now = sum(total, 'now');
  const due = plan.overrides.filter((override) => override.isDueAnotherLook).length;
  const undecided = plan.overrides.filter((override) => override.needsDecision !== null).length;
  const beforeName = usesLock ? t('review.lockedIn', { version: locked.version.number }) : t('review.model');
  const handOver = plan.handOver?.state === 'submitted' ? plan.handOver : null;
  return (
    <details open className="plan-review border-t border-rule pt-1.5 pb-2">
      <summary className="cursor-pointer">
        <b className="font-display text-[15px]">{usesLock ? t('review.sinceLock') : t('review.againstModel')}</b>{' '}
        <span className="text-soft">
          {t('review.inAll', {
            units: formatSigned(now - was),
            share: was === 0 ? '' : `(${formatSignedPercent((now - was) / was)})`,
            before: formatNumber(was),
            now: formatNumber(now),
          })}
        </span>
      </summary>
      <div className="mt-1 grid gap-x-10 gap-y-2 min-[1100px]:grid-cols-[minmax(0,1.3fr)_minmax(0,1fr)]">
        <div className="min-w-0 overflow-x-auto">
          <Table
            caption={t('review.byWeek')}
            className="text-small [&_td]:!py-0.5 [&_td]:!pr-2 [&_th]:!py-0.5 [&_th]:!pr-2"
          >
            <thead>
              <tr>
                <th scope="col">{t('review.units')}</th>
                {compared.map(({ week }) => (
                  <th key={week} scope="col" className="num">
                    {shortWeekLabel(week)}
                  </th>
                ))}
              </tr>
            </thead>
            <tbody>
              <tr>
                <th scope="row" className="whitespace-nowrap">
                  {beforeName}
                </th>
                {compared.map((week) => (
                  <td key={week.week} className="num">
                    {formatNumber(week.was)}
                  </td>
                ))}
              </tr>
              <tr>
                <th scope="row">{t('review.now')}</th>
                {compared.map((week) => (
                  <td key={week.week} className="num">
                    {formatNumber(week.now)}
                  </td>
                ))}
              </tr>
            </tbody>
            <tfoot>
              <tr>
                <th scope="row">{t('review.change')}</th>
                {compared.map((week) => (
                  <td key={week.week} className="num">
                    {formatSigned(week.now - week.was)}
                  </td>
                ))}
              </tr>
            </tfoot>
          </Table>
          {locked !== null && (
            <button type="button" className="act mt-1.5 text-small" onClick={() => setAgainstLock(!isAgainstLock)}>
              {usesLock ? t('review.useModel') : t('review.useLock')}
            </button>
          )}
        </div>
        <div className="min-w-0 text-small">
          {movers.length === 0 ? (
            <p className="text-soft">{t('review.nothingMoved')}</p>
          ) : (
            <Table caption={t('review.movers')} className="[&_td]:!py-0.5 [&_th]:!py-0.5">
              <thead>
                <tr>
                  <th scope="col">{t('review.movedMost')}</th>
                  <th scope="col" className="num">
                    {beforeName}
                  </th>
                  <th scope="col" className="num">
                    {t('review.now')}
                  </th>
                  <th scope="col" className="num">
                    {t('review.change')}
                  </th>
                </tr>
              </thead>
              <tbody>
                {movers.map((mover) => (
                  <tr key={mover.key}>
                    <th scope="row">{mover.name}</th>
                    <td className="num">{formatNumber(mover.before)}</td>
                    <td className="num">{formatNumber(mover.now)}</td>
                    <td className="num">
                      <b>{formatSigned(mover.change)}</b>
                    </td>
                  </tr>
                ))}
              </tbody>
            </Table>
          )}
          {rest > 0 && (
            <p className="mt-1 text-soft">{t('review.rest', { count: rest, most: formatNumber(largestOfRest) })}</p>
          )}
          {handOver?.comment && (
            <blockquote className="mt-2 border-l-[3px] border-moss pl-3">
              “{handOver.comment}”
              <footer className="text-soft">
                {t('review.comment', {
                  name: handOver.actor,
                  version: handOver.version,
                  at: formatInstant(handOver.at),
                })}
              </footer>
            </blockquote>
          )}
          {(due > 0 || undecided > 0) && (
            <p className="mt-1">
              {[
                due > 0 && t('review.due', { count: due }),
                undecided > 0 && t('review.undecided', { count: undecided }),
              ]
                .filter(Boolean)
                .join(' · ')}
            </p>
          )}
        </div>
      </div>
    </details>
  );
}

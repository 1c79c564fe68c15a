import { useState } from 'react';
import { useTranslation } from 'react-i18next';
import type { BuildPack, PackList } from '../../../../shared/contracts/packs.ts';
import { listWeeks, weeksBetween } from '../../../../shared/domain/weeks.ts';
import { ActLink, Button } from '../../../components/Button.tsx';
import { Select } from '../../../components/fields.tsx';
import { ProblemNote } from '../../../components/states.tsx';
import { StateMark } from '../../../components/StateRoute.tsx';
import { Table } from '../../../components/Table.tsx';
import { withCategory } from '../../../lib/categories.ts';
import { formatDate, formatInstant, formatWeekSpan, weekLabel } from '../../../lib/format.ts';

type Offer = NonNullable<PackList['offer']>;
type OfferedLine = Offer['lines'][number];

function isLockedWithin(line: OfferedLine, firstWeek: string, lastWeek: string): boolean {
  return (
    line.lockedVersion !== null &&
    line.firstLockedWeek !== null &&
    line.lastLockedWeek !== null &&
    line.firstLockedWeek <= lastWeek &&
    line.lastLockedWeek >= firstWeek
  );
}

/** Weeks and lines of the next pack; lines without a locked week in the range can't be chosen. */
export function PackBuilder({
  categoryId,
  offer,
  isBusy,
  error,
  onBuild,
}: {
  categoryId: number;
  offer: Offer;
  isBusy: boolean;
  error: unknown;
  onBuild: (body: BuildPack) => void;
}) {
  const { t } = useTranslation('packs');
  const [firstWeek, setFirstWeek] = useState(offer.firstWeek ?? '');
  const [lastWeek, setLastWeek] = useState(offer.lastWeek ?? '');
  const [leftOut, setLeftOut] = useState<ReadonlySet<number>>(new Set());
  if (offer.firstWeek === null || offer.lastWeek === null) {
    return (
      <p className="text-soft">
        {t('build.nothingLocked')} <ActLink to={withCategory('/plan', categoryId)}>{t('build.toPlan')}</ActLink>
      </p>
    );
  }
  const weeks = listWeeks(offer.firstWeek, weeksBetween(offer.firstWeek, offer.lastWeek) + 1);
  const chosen = offer.lines.filter((line) => isLockedWithin(line, firstWeek, lastWeek) && !leftOut.has(line.id));
  const isTurned = lastWeek < firstWeek;
  const toggle = (lineId: number) =>
    setLeftOut((before) => {
      const after = new Set(before);
      if (!after.delete(lineId)) after.add(lineId);
      return after;
    });
  const options = weeks.map((week) => (
    <option key={week} value={week}>
      {`${weekLabel(week)} (${formatDate(week)})`}
    </option>
  ));
  return (
    <form
      className="grid gap-4"
      onSubmit={(event) => {
        event.preventDefault();
        onBuild({ categoryId, firstWeek, lastWeek, lineIds: chosen.map(({ id }) => id) });
      }}
    >
      <div className="grid grid-cols-2 gap-5">
        <Select label={t('build.firstWeek')} value={firstWeek} onChange={(event) => setFirstWeek(event.target.value)}>
          {options}
        </Select>
        <Select
          label={t('build.lastWeek')}
          value={lastWeek}
          error={isTurned ? t('build.turned') : undefined}
          onChange={(event) => setLastWeek(event.target.value)}
        >
          {options}
        </Select>
      </div>
      <Table caption={t('build.caption')}>
        <thead>
          <tr>
            <th scope="col">{t('build.line')}</th>
            <th scope="col">{t('build.version')}</th>
            <th scope="col">{t('build.weeks')}</th>
          </tr>
        </thead>
        <tbody>
          {offer.lines.map((line) => {
            const canGoIn = isLockedWithin(line, firstWeek, lastWeek);
            return (
              <tr key={line.id} className={canGoIn ? '' : 'text-soft'}>
                <th scope="row">
                  <label className="inline-flex items-baseline gap-2">
                    <input
                      type="checkbox"
                      className="translate-y-[2px] accent-moss"
                      aria-label={t('build.include', { line: line.name })}
                      disabled={!canGoIn}
                      checked={canGoIn && !leftOut.has(line.id)}
                      onChange={() => toggle(line.id)}
                    />
                    {line.name}
                  </label>
                </th>
                <td className="whitespace-nowrap">
                  {line.lockedVersion === null ? (
                    t('build.notLocked')
                  ) : (
                    <>
                      <StateMark state="locked" />
                      {line.lockedVersion}
                    </>
                  )}
                </td>
                <td>
                  {line.firstLockedWeek && line.lastLockedWeek
                    ? formatWeekSpan(line.firstLockedWeek, line.lastLockedWeek, t('common:to'))
                    : ''}
                  <span className="block text-small text-soft">
                    {line.lockedVersion !== null && !canGoIn
                      ? t('build.notInRange')
                      : line.lockedBy && line.lockedAt && `${line.lockedBy}, ${formatInstant(line.lockedAt)}`}
                  </span>
                </td>
              </tr>
            );
          })}
        </tbody>
      </Table>
      <ProblemNote error={error} />
      <div className="flex items-center gap-4">
        <Button type="submit" disabled={isBusy || isTurned || chosen.length === 0}>
          {t('build.submit', { count: chosen.length })}
        </Button>
        {chosen.length === 0 && <span className="text-soft">{t('build.chooseLines')}</span>}
      </div>
    </form>
  );
}

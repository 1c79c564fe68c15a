import { useState } from 'react';
import { useTranslation } from 'react-i18next';
import type { CellConflict } from '../../../../shared/contracts/plan.ts';
import { Button } from '../../../components/Button.tsx';
import { Dialog } from '../../../components/Dialog.tsx';
import { formatInstant, formatNumber, formatWeekDates, weekLabel } from '../../../lib/format.ts';
import type { SettledCell } from '../pending-edits.ts';

export interface OwnSide {
  author: string;
  reason: string | null;
  note: string | null;
  /** How the value came about, e.g. `scale by 1.05`. */
  describe: (conflict: CellConflict) => string | null;
}

/** Two people changed one cell: both values, who, when and why; one is picked for each. */
export function ConflictDialog({
  conflicts,
  baseVersion,
  otherChanges,
  own,
  nameOf,
  isBusy,
  onSettle,
  onClose,
}: {
  conflicts: readonly CellConflict[];
  baseVersion: number;
  /** Changes of this save that nobody else touched. */
  otherChanges: number;
  own: OwnSide;
  nameOf: (conflict: CellConflict) => string;
  isBusy: boolean;
  onSettle: (settled: SettledCell[]) => void;
  onClose: () => void;
}) {
  const { t } = useTranslation('plan');
  const [kept, setKept] = useState<Record<number, 'yours' | 'theirs'>>({});
  const keptOf = (index: number) => kept[index] ?? 'yours';
  const setAll = (keep: 'yours' | 'theirs') => setKept(Object.fromEntries(conflicts.map((_, index) => [index, keep])));
  const only = conflicts.length === 1 ? conflicts[0] : undefined;
  return (
    <Dialog
      open
      isWide={conflicts.length > 1}
      onClose={onClose}
      title={t('conflict.title', { count: conflicts.length })}
      lead={
        only
          ? t('conflict.leadOne', {
              name: nameOf(only),
              week: weekLabel(only.weekStart),
              dates: formatWeekDates(only.weekStart),
              version: baseVersion,
              before: formatNumber(only.before),
            })
          : t('conflict.lead', { version: baseVersion })
      }
      footer={
        <>
          <span className="mr-auto text-soft">{t('conflict.toSettle', { count: conflicts.length })}</span>
          <Button variant="text" onClick={onClose}>
            {t('conflict.back')}
          </Button>
          <Button
            disabled={isBusy}
            onClick={() =>
              onSettle(
                conflicts.map(({ scope, weekStart, yours }, index) => ({
                  scope,
                  weekStart,
                  yours,
                  keep: keptOf(index),
                })),
              )
            }
          >
            {only
              ? t('conflict.saveWith', { value: formatNumber(keptOf(0) === 'yours' ? only.yours : only.theirs) })
              : t('conflict.save')}
          </Button>
        </>
      }
    >
      {conflicts.length > 1 && (
        <p className="mb-3 flex gap-5">
          <Button variant="text" onClick={() => setAll('yours')}>
            {t('conflict.allYours')}
          </Button>
          <Button variant="text" onClick={() => setAll('theirs')}>
            {t('conflict.allTheirs')}
          </Button>
        </p>
      )}
      <div className={conflicts.length > 1 ? 'max-h-[46vh] overflow-y-auto' : ''}>
        {conflicts.map((conflict, index) => (
          <fieldset
            key={`${conflict.scope.itemId}/${conflict.scope.locationId}/${conflict.weekStart}`}
            className="border-t border-rule py-3 last:border-b"
          >
            <legend className="sr-only">
              {nameOf(conflict)}, {weekLabel(conflict.weekStart)}
            </legend>
            {!only && (
              <p className="mb-1">
                <b>{nameOf(conflict)}</b>, {weekLabel(conflict.weekStart)} ({formatWeekDates(conflict.weekStart)}),{' '}
                {t('conflict.stoodAt', { before: formatNumber(conflict.before) })}
              </p>
            )}
            <div className="grid grid-cols-2">
              <Side
                name={`conflict-${index}`}
                isTaken={keptOf(index) === 'yours'}
                onTake={() => setKept({ ...kept, [index]: 'yours' })}
                title={t('conflict.keepYours')}
                value={conflict.yours}
                facts={[
                  [t('conflict.who'), own.author],
                  [t('conflict.when'), t('conflict.notSaved')],
                  [t('conflict.how'), own.describe(conflict)],
                  [t('conflict.reason'), own.reason],
                  [t('conflict.note'), own.note],
                ]}
              />
              <Side
                name={`conflict-${index}`}
                isRight
                isTaken={keptOf(index) === 'theirs'}
                onTake={() => setKept({ ...kept, [index]: 'theirs' })}
                title={t('conflict.keepTheirs', { name: conflict.theirAuthor })}
                value={conflict.theirs}
                facts={[
                  [t('conflict.who'), conflict.theirAuthor],
                  [
                    t('conflict.when'),
                    t('conflict.savedAt', {
                      at: formatInstant(conflict.theirAt),
                      version: conflict.theirVersion,
                    }),
                  ],
                  [t('conflict.reason'), conflict.theirReason],
                  [t('conflict.note'), conflict.theirNote],
                ]}
              />
            </div>
          </fieldset>
        ))}
      </div>
      <p className="mt-3 text-small text-soft">
        {t('conflict.rest')}
        {otherChanges > 0 && ` ${t('conflict.others', { count: otherChanges })}`}
      </p>
    </Dialog>
  );
}

function Side({
  name,
  isTaken,
  onTake,
  title,
  value,
  facts,
  isRight = false,
}: {
  name: string;
  isTaken: boolean;
  onTake: () => void;
  title: string;
  value: number;
  facts: [string, string | null][];
  isRight?: boolean;
}) {
  return (
    <div className={isRight ? 'border-l border-line pl-5' : 'pr-5'}>
      <label className="flex items-center gap-2">
        <input type="radio" className="accent-moss" name={name} checked={isTaken} onChange={onTake} />
        <span className={isTaken ? 'font-[640]' : ''}>{title}</span>
      </label>
      <p className="my-1">
        <span className="over text-[32px]/[38px]">{formatNumber(value)}</span>
      </p>
      <dl className="grid grid-cols-[50px_1fr] gap-x-2">
        {facts.map(([term, fact]) =>
          fact === null || fact === '' ? null : (
            <div key={term} className="contents">
              <dt className="text-soft">{term}</dt>
              <dd className="break-words">{fact}</dd>
            </div>
          ),
        )}
      </dl>
    </div>
  );
}

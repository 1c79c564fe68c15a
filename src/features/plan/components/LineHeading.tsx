import { useState } from 'react';
import { useTranslation } from 'react-i18next';
import type { LinePlan } from '../../../../shared/contracts/plan.ts';
import { Button } from '../../../components/Button.tsx';
import { StateRoute } from '../../../components/StateRoute.tsx';
import { formatDate, formatInstant, formatWeekSpan, weekLabel } from '../../../lib/format.ts';
import { readToday } from '../../../lib/today.ts';
import { HandOverDialog, type HandOverKind } from './HandOverDialogs.tsx';

/** Name, version line and the way from draft to locked with what this person may do on it. */
export function LineHeading({ plan, hasEdits }: { plan: LinePlan; hasEdits: boolean }) {
  const { t } = useTranslation('plan');
  const [open, setOpen] = useState<HandOverKind | null>(null);
  const { may, state, version, locks, round, handOver } = plan;
  const title = hasEdits ? t('handOver.saveFirst') : undefined;
  const step = (kind: HandOverKind, variant: 'solid' | 'quiet' | 'text') => (
    <Button
      variant={variant}
      className={variant === 'text' ? 'h-8' : 'relative z-1'}
      disabled={hasEdits}
      title={title}
      onClick={() => setOpen(kind)}
    >
      {t(`handOver.${kind}.open`)}
    </Button>
  );
  const next =
    state === 'draft' && may.submit
      ? step('submit', 'solid')
      : state === 'submitted' && may.lock
        ? step('lock', 'solid')
        : undefined;
  const sentences: string[] = [];
  if (version) {
    sentences.push(
      t(version.parent === null ? 'heading.firstVersion' : 'heading.version', {
        number: version.number,
        at: formatInstant(version.at),
        author: version.author,
        parent: version.parent,
      }),
    );
  }
  for (const lock of locks.slice(0, 3)) {
    sentences.push(
      t('heading.lock', {
        weeks: formatWeekSpan(lock.firstWeek, lock.lastWeek),
        version: lock.version,
        actor: lock.actor,
      }),
    );
  }
  if (handOver && state !== 'locked') {
    sentences.push(t(`heading.${handOver.state}`, { actor: handOver.actor, at: formatInstant(handOver.at) }));
  }
  return (
    <header className="flex flex-wrap items-start justify-between gap-x-7 gap-y-1 pb-2">
      <div className="min-w-0 max-w-[760px] flex-1">
        <h1>{plan.line.name}</h1>
        <p className="mt-1 text-small text-soft">
          {sentences.join(' ')}
          {round && (
            <>
              {' '}
              <span className={round.due < readToday() && state === 'draft' ? 'text-madder' : ''}>
                {t('heading.round', {
                  first: weekLabel(round.firstWeek),
                  last: weekLabel(round.lastWeek),
                  due: formatDate(round.due),
                })}
              </span>
            </>
          )}
        </p>
        {handOver?.state === 'returned' && state === 'draft' && handOver.comment && (
          <blockquote className="mt-1 border-l-[3px] border-madder pl-3 text-small">
            “{handOver.comment}” <span className="text-soft">{t('heading.returnedBy', { actor: handOver.actor })}</span>
          </blockquote>
        )}
      </div>
      <div className="flex items-start gap-5">
        {state === 'submitted' && may.returnLine && step('return', 'quiet')}
        {state === 'draft' && may.lock && step('lock', 'text')}
        {may.unlock && plan.lockedWeeks.length > 0 && step('unlock', 'text')}
        <StateRoute state={state} action={next} />
      </div>
      {open && <HandOverDialog kind={open} plan={plan} onClose={() => setOpen(null)} />}
    </header>
  );
}

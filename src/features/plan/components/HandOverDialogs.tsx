import { useId, useState } from 'react';
import { useTranslation } from 'react-i18next';
import type { LinePlan } from '../../../../shared/contracts/plan.ts';
import { Button } from '../../../components/Button.tsx';
import { Dialog } from '../../../components/Dialog.tsx';
import { Select, TextArea } from '../../../components/fields.tsx';
import { ProblemNote } from '../../../components/states.tsx';
import { showToast } from '../../../components/toasts.ts';
import { formatDate, weekLabel } from '../../../lib/format.ts';
import { planWeekStarts } from '../line-figures.ts';
import { useHandOver, type HandOverStep } from '../queries.ts';

export type HandOverKind = HandOverStep['step'];

/** Submit, return, lock or unlock: what it does, the weeks where they matter, and a comment or reason. */
export function HandOverDialog({ kind, plan, onClose }: { kind: HandOverKind; plan: LinePlan; onClose: () => void }) {
  const { t } = useTranslation('plan');
  const { t: common } = useTranslation('common');
  const formId = useId();
  const handOver = useHandOver(plan.line.id);
  const locked = new Set(plan.lockedWeeks);
  const hasWeeks = kind === 'lock' || kind === 'unlock';
  const weeks = planWeekStarts(plan).filter((week) => kind !== 'unlock' || locked.has(week));
  const inRound = (week: string) => !plan.round || (week >= plan.round.firstWeek && week <= plan.round.lastWeek);
  const [firstWeek, setFirstWeek] = useState(weeks.find(inRound) ?? weeks[0] ?? '');
  const [lastWeek, setLastWeek] = useState(weeks.findLast(inRound) ?? weeks.at(-1) ?? '');
  const [comment, setComment] = useState('');
  const [hasTried, setTried] = useState(false);
  const isCommentNeeded = kind === 'return' || kind === 'unlock';
  const commentError = hasTried && isCommentNeeded && comment.trim() === '' ? t(`handOver.${kind}.missing`) : undefined;
  const weeksError = hasTried && hasWeeks && lastWeek < firstWeek ? t('handOver.weeksTurned') : undefined;
  const version = plan.version?.number ?? 0;

  function readStep(): HandOverStep {
    const said = comment.trim();
    if (kind === 'submit') return { step: kind, body: { version, comment: said || null } };
    if (kind === 'return') return { step: kind, body: { comment: said } };
    if (kind === 'lock') return { step: kind, body: { version, firstWeek, lastWeek, comment: said || null } };
    return { step: kind, body: { firstWeek, lastWeek, reason: said } };
  }

  const weekOptions = weeks.map((week) => (
    <option key={week} value={week}>
      {weekLabel(week)}, {formatDate(week)}
    </option>
  ));
  return (
    <Dialog
      open
      onClose={onClose}
      title={t(`handOver.${kind}.title`, { line: plan.line.name })}
      lead={t(`handOver.${kind}.lead`, { version })}
      footer={
        <>
          <Button variant="text" onClick={onClose}>
            {common('cancel')}
          </Button>
          <Button type="submit" form={formId} disabled={handOver.isPending}>
            {t(`handOver.${kind}.action`)}
          </Button>
        </>
      }
    >
      <form
        id={formId}
        noValidate
        className="flex flex-col gap-4"
        onSubmit={(event) => {
          event.preventDefault();
          setTried(true);
          if ((isCommentNeeded && comment.trim() === '') || (hasWeeks && lastWeek < firstWeek)) return;
          handOver.mutate(readStep(), {
            onSuccess: () => {
              showToast({ tone: 'done', text: t(`handOver.${kind}.done`, { line: plan.line.name, version }) });
              onClose();
            },
          });
        }}
      >
        {hasWeeks && (
          <div className="grid grid-cols-2 gap-4">
            <Select
              label={t('handOver.firstWeek')}
              value={firstWeek}
              onChange={(event) => setFirstWeek(event.target.value)}
            >
              {weekOptions}
            </Select>
            <Select
              label={t('handOver.lastWeek')}
              value={lastWeek}
              error={weeksError}
              onChange={(event) => setLastWeek(event.target.value)}
            >
              {weekOptions}
            </Select>
          </div>
        )}
        <TextArea
          label={t(`handOver.${kind}.comment`)}
          error={commentError}
          maxLength={2000}
          autoFocus
          value={comment}
          onChange={(event) => setComment(event.target.value)}
        />
        <ProblemNote error={handOver.error} />
      </form>
    </Dialog>
  );
}

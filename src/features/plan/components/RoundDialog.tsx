import { useId, useState } from 'react';
import { useTranslation } from 'react-i18next';
import type { Round } from '../../../../shared/contracts/plan.ts';
import { Button } from '../../../components/Button.tsx';
import { Dialog } from '../../../components/Dialog.tsx';
import { Select, TextField } from '../../../components/fields.tsx';
import { ProblemNote } from '../../../components/states.tsx';
import { showToast } from '../../../components/toasts.ts';
import { formatDate, weekLabel } from '../../../lib/format.ts';
import { useChangeRound } from '../queries.ts';

/** When a round is due and which weeks it plans. */
export function RoundDialog({
  categoryId,
  round,
  weeks,
  onClose,
}: {
  categoryId: number;
  round: Round;
  weeks: readonly string[];
  onClose: () => void;
}) {
  const { t } = useTranslation('plan');
  const { t: common } = useTranslation('common');
  const formId = useId();
  const change = useChangeRound(categoryId);
  const [due, setDue] = useState(round.due.slice(0, 10));
  const [firstWeek, setFirstWeek] = useState(round.firstWeek);
  const [lastWeek, setLastWeek] = useState(round.lastWeek);
  const [hasTried, setTried] = useState(false);
  const choices = [...new Set([...weeks, round.firstWeek, round.lastWeek])].sort();
  const options = choices.map((week) => (
    <option key={week} value={week}>
      {weekLabel(week)}, {formatDate(week)}
    </option>
  ));
  return (
    <Dialog
      open
      onClose={onClose}
      title={t('category.roundTitle')}
      lead={t('category.roundLead')}
      footer={
        <>
          <Button variant="text" onClick={onClose}>
            {common('cancel')}
          </Button>
          <Button type="submit" form={formId} disabled={change.isPending}>
            {t('category.roundSave')}
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
          if (due === '' || lastWeek < firstWeek) return;
          change.mutate(
            { due, firstWeek, lastWeek },
            {
              onSuccess: () => {
                showToast({ tone: 'done', text: t('category.roundDone') });
                onClose();
              },
            },
          );
        }}
      >
        <TextField
          type="date"
          label={t('category.roundDate')}
          value={due}
          error={hasTried && due === '' ? t('category.roundDateMissing') : undefined}
          onChange={(event) => setDue(event.target.value)}
        />
        <div className="grid grid-cols-2 gap-4">
          <Select
            label={t('handOver.firstWeek')}
            value={firstWeek}
            onChange={(event) => setFirstWeek(event.target.value)}
          >
            {options}
          </Select>
          <Select
            label={t('handOver.lastWeek')}
            value={lastWeek}
            error={hasTried && lastWeek < firstWeek ? t('handOver.weeksTurned') : undefined}
            onChange={(event) => setLastWeek(event.target.value)}
          >
            {options}
          </Select>
        </div>
        <ProblemNote error={change.error} />
      </form>
    </Dialog>
  );
}

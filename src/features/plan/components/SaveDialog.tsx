import { useQuery } from '@tanstack/react-query';
import { useId, useState } from 'react';
import { useTranslation } from 'react-i18next';
import { Button } from '../../../components/Button.tsx';
import { Dialog } from '../../../components/Dialog.tsx';
import { Select, TextArea } from '../../../components/fields.tsx';
import { ProblemNote } from '../../../components/states.tsx';
import { formatPercent } from '../../../lib/format.ts';
import { reasonsQuery } from '../queries.ts';

export interface SaveChoice {
  reasonId: number;
  note: string | null;
}

/** Asks why before a save: a reason from the list, and a note where the change is large. */
export function SaveDialog({
  changes,
  largestChange,
  start,
  isBusy,
  error,
  onSave,
  onClose,
}: {
  changes: number;
  /** The largest change of a cell as a share of what was there; Infinity = from nothing. */
  largestChange: number;
  start: SaveChoice | null;
  isBusy: boolean;
  error: unknown;
  onSave: (choice: SaveChoice) => void;
  onClose: () => void;
}) {
  const { t } = useTranslation('plan');
  const { t: common } = useTranslation('common');
  const formId = useId();
  const { data, error: reasonsError } = useQuery(reasonsQuery);
  const [reason, setReason] = useState(start ? String(start.reasonId) : '');
  const [note, setNote] = useState(start?.note ?? '');
  const [hasTried, setTried] = useState(false);
  const isNoteNeeded = data !== undefined && largestChange > data.noteThreshold + 1e-9;
  const reasons = data?.reasons.filter(({ isActive }) => isActive) ?? [];
  const reasonError = hasTried && reason === '' ? t('save.reasonMissing') : undefined;
  const noteError = hasTried && isNoteNeeded && note.trim() === '' ? t('save.noteMissing') : undefined;
  return (
    <Dialog
      open
      onClose={onClose}
      title={t('save.title', { count: changes })}
      lead={t('save.lead')}
      footer={
        <>
          <Button variant="text" onClick={onClose}>
            {common('cancel')}
          </Button>
          <Button type="submit" form={formId} disabled={isBusy || data === undefined}>
            {isBusy ? t('save.busy') : t('save.action', { count: changes })}
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
          if (reason === '' || (isNoteNeeded && note.trim() === '')) return;
          onSave({ reasonId: Number(reason), note: note.trim() === '' ? null : note.trim() });
        }}
      >
        <Select
          label={t('save.reason')}
          value={reason}
          error={reasonError}
          autoFocus
          onChange={(event) => setReason(event.target.value)}
        >
          <option value="">{t('save.chooseReason')}</option>
          {reasons.map(({ id, name }) => (
            <option key={id} value={id}>
              {name}
            </option>
          ))}
        </Select>
        <TextArea
          label={isNoteNeeded ? t('save.note') : t('save.noteOptional')}
          hint={
            isNoteNeeded && data ? t('save.noteHint', { threshold: formatPercent(data.noteThreshold, 0) }) : undefined
          }
          error={noteError}
          maxLength={2000}
          value={note}
          onChange={(event) => setNote(event.target.value)}
        />
        <ProblemNote error={error ?? reasonsError} />
      </form>
    </Dialog>
  );
}

import { useState } from 'react';
import { useTranslation } from 'react-i18next';
import type { ImportSummary } from '../../../../shared/contracts/sales.ts';
import { Button } from '../../../components/Button.tsx';
import { Dialog } from '../../../components/Dialog.tsx';
import { TextArea } from '../../../components/fields.tsx';
import { ProblemNote } from '../../../components/states.tsx';
import { useWithdrawImport } from '../queries.ts';

/** Asks why, then withdraws. The work itself shows on the import's page. */
export function WithdrawDialog({
  subject,
  onClose,
}: {
  subject: Pick<ImportSummary, 'id' | 'fileName'>;
  onClose: () => void;
}) {
  const { t } = useTranslation('sales');
  const withdraw = useWithdrawImport(subject.id);
  const [reason, setReason] = useState('');
  const [isTried, setTried] = useState(false);
  const isMissing = isTried && reason.trim() === '';
  const submit = async () => {
    setTried(true);
    if (reason.trim() === '') return;
    try {
      await withdraw.mutateAsync(reason.trim());
      onClose();
    } catch {
      // Shown above the buttons.
    }
  };
  return (
    <Dialog
      open
      onClose={onClose}
      title={t('withdraw.title', { name: subject.fileName })}
      lead={t('withdraw.lead')}
      footer={
        <>
          <Button variant="text" onClick={onClose}>
            {t('common:cancel')}
          </Button>
          <Button disabled={withdraw.isPending} onClick={() => void submit()}>
            {t('withdraw.submit')}
          </Button>
        </>
      }
    >
      <div className="grid gap-3">
        <TextArea
          label={t('withdraw.reason')}
          autoFocus
          value={reason}
          maxLength={2000}
          error={isMissing ? t('withdraw.reasonMissing') : undefined}
          onChange={(event) => setReason(event.target.value)}
        />
        <ProblemNote error={withdraw.error} />
      </div>
    </Dialog>
  );
}

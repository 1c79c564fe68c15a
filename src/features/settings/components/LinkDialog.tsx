import { useState } from 'react';
import { useTranslation } from 'react-i18next';
import type { InvitedPerson } from '../../../../shared/contracts/settings.ts';
import { Button } from '../../../components/Button.tsx';
import { Dialog } from '../../../components/Dialog.tsx';
import { TextField } from '../../../components/fields.tsx';
import { formatInstant } from '../../../lib/format.ts';

/** The one-time link, shown this once. */
export function LinkDialog({ invited, onClose }: { invited: InvitedPerson; onClose: () => void }) {
  const { t } = useTranslation('settings');
  const [isCopied, setCopied] = useState(false);
  const copy = async () => {
    await navigator.clipboard.writeText(invited.link);
    setCopied(true);
  };
  return (
    <Dialog
      open
      onClose={onClose}
      title={t('people.linkTitle', { name: invited.person.name })}
      lead={t('people.linkLead', { when: formatInstant(invited.expiresAt) })}
      footer={<Button onClick={onClose}>{t('people.done')}</Button>}
    >
      <div className="flex items-end gap-4">
        <TextField
          label={t('people.linkLabel')}
          className="flex-1"
          readOnly
          value={invited.link}
          onFocus={(event) => event.target.select()}
        />
        <Button variant="quiet" onClick={() => void copy()}>
          <span aria-live="polite">{t(isCopied ? 'people.copied' : 'people.copy')}</span>
        </Button>
      </div>
    </Dialog>
  );
}

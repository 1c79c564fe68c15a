import { type ReactNode, useEffect, useId, useRef } from 'react';
import { useTranslation } from 'react-i18next';
import { CloseButton } from './CloseButton.tsx';

export interface DialogProps {
  open: boolean;
  onClose: () => void;
  title: string;
  lead?: ReactNode;
  children?: ReactNode;
  /** Buttons, the one to press last. */
  footer?: ReactNode;
  isWide?: boolean;
}

/** A question over the page. The browser's own modal dialog: Esc closes, focus stays inside and returns, the rest is inert. */
export function Dialog({ open, ...rest }: DialogProps) {
  return open ? <OpenDialog {...rest} /> : null;
}

function OpenDialog({ onClose, title, lead, children, footer, isWide = false }: Omit<DialogProps, 'open'>) {
  const { t } = useTranslation('common');
  const dialog = useRef<HTMLDialogElement>(null);
  const id = useId();
  useEffect(() => {
    const element = dialog.current;
    if (element && !element.open) element.showModal();
    return () => element?.close();
  }, []);
  return (
    <dialog
      ref={dialog}
      className={`slip-dialog ${isWide ? 'w-[860px]' : 'w-[520px]'} max-w-[calc(100vw-48px)]`}
      aria-labelledby={`${id}-title`}
      aria-describedby={lead ? `${id}-lead` : undefined}
      onCancel={(event) => {
        event.preventDefault();
        onClose();
      }}
      onClick={(event) => {
        if (event.target === dialog.current) onClose();
      }}
    >
      <div className="px-7 pt-5 pb-6">
        <div className="flex items-start justify-between gap-4">
          <h2 id={`${id}-title`} className="text-[20px]/6">
            {title}
          </h2>
          <CloseButton label={t('close')} onClick={onClose} />
        </div>
        {lead && (
          <div id={`${id}-lead`} className="mt-1 text-soft">
            {lead}
          </div>
        )}
        {children && <div className="mt-4">{children}</div>}
        {footer && <div className="mt-6 flex items-center justify-end gap-5">{footer}</div>}
      </div>
    </dialog>
  );
}

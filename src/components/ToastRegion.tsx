import { useSyncExternalStore } from 'react';
import { useTranslation } from 'react-i18next';
import { CloseButton } from './CloseButton.tsx';
import { closeToast, onToasts, readToasts } from './toasts.ts';

export function ToastRegion() {
  const { t } = useTranslation('common');
  const toasts = useSyncExternalStore(onToasts, readToasts);
  return (
    <div
      role="region"
      aria-label={t('messages')}
      aria-live="polite"
      className="pointer-events-none fixed bottom-4 left-1/2 z-50 flex -translate-x-1/2 flex-col gap-2"
    >
      {toasts.map((toast) => (
        <div
          key={toast.id}
          className={`pointer-events-auto flex max-w-[560px] items-start gap-4 border-l-4 border-y border-r bg-sheet px-4 py-2.5 ${
            toast.tone === 'problem' ? 'border-madder' : 'border-moss'
          }`}
        >
          <p className="flex-1">{toast.text}</p>
          <CloseButton label={t('close')} onClick={() => closeToast(toast.id)} />
        </div>
      ))}
    </div>
  );
}

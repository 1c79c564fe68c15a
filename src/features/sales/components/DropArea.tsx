import { type DragEvent, useId, useRef, useState } from 'react';
import { useTranslation } from 'react-i18next';
import { useNavigate } from 'react-router-dom';
import { Button } from '../../../components/Button.tsx';
import { ProblemNote } from '../../../components/states.tsx';
import { useCategoryInView, withCategory } from '../../../lib/categories.ts';
import { formatBytes } from '../../../lib/format.ts';
import { useSendFile } from '../queries.ts';

/** Drop or choose one file; it is sent at once and its preview opened. */
export function DropArea() {
  const { t } = useTranslation('sales');
  const navigate = useNavigate();
  const { category } = useCategoryInView();
  const send = useSendFile();
  const input = useRef<HTMLInputElement>(null);
  const [isOver, setOver] = useState(false);
  const [wrongFile, setWrongFile] = useState<string | null>(null);
  const textId = useId();

  const take = async (file: File | undefined) => {
    if (!file || send.isPending) return;
    setWrongFile(null);
    if (!/\.(xlsx|xlsm|csv|tsv|txt)$/i.test(file.name)) {
      setWrongFile(file.name);
      return;
    }
    try {
      const detail = await send.mutateAsync(file);
      await navigate(withCategory(`/sales/imports/${detail.id}`, category?.id ?? null));
    } catch {
      // Shown below.
    }
  };
  const hold = (event: DragEvent) => {
    event.preventDefault();
    setOver(true);
  };

  return (
    <div>
      <div
        className={`flex items-center justify-between gap-8 border-y border-dashed px-5 py-5 ${
          isOver ? 'border-moss bg-moss-tint' : 'border-rule bg-sheet'
        }`}
        onDragEnter={hold}
        onDragOver={hold}
        onDragLeave={() => setOver(false)}
        onDrop={(event) => {
          event.preventDefault();
          setOver(false);
          void take(event.dataTransfer.files[0]);
        }}
      >
        <div aria-live="polite">
          <h2>
            {send.isPending
              ? t('drop.uploading', { name: send.variables.name, size: formatBytes(send.variables.size) })
              : t(isOver ? 'drop.over' : 'drop.title')}
          </h2>
          <p id={textId} className="mt-1 max-w-[560px] text-soft">
            {t('drop.text')}
          </p>
        </div>
        <Button aria-describedby={textId} disabled={send.isPending} onClick={() => input.current?.click()}>
          {t('drop.choose')}
        </Button>
        <input
          ref={input}
          type="file"
          className="hidden"
          aria-label={t('drop.choose')}
          tabIndex={-1}
          accept=".xlsx,.xlsm,.csv,.tsv,.txt"
          onChange={(event) => {
            const file = event.target.files?.[0];
            event.target.value = '';
            void take(file);
          }}
        />
      </div>
      {wrongFile !== null && (
        <p role="alert" className="mt-2 border-l-2 border-madder py-1 pl-3 text-madder">
          {t('drop.wrongType', { name: wrongFile })}
        </p>
      )}
      {send.error && (
        <div className="mt-2">
          <ProblemNote error={send.error} />
        </div>
      )}
    </div>
  );
}

import { useState } from 'react';
import { useTranslation } from 'react-i18next';
import { Button } from '../../../components/Button.tsx';
import { Dialog } from '../../../components/Dialog.tsx';
import { formatNumber } from '../../../lib/format.ts';
import type { DecimalMark } from '../number-input.ts';

/** A pasted rectangle that means one thing with a decimal point and another with a decimal comma: both readings, to pick from. */
export function PasteDialog({
  example,
  byMark,
  ownMark,
  onPick,
  onClose,
}: {
  example: string;
  byMark: Record<DecimalMark, (number | null)[][]>;
  ownMark: DecimalMark;
  onPick: (values: (number | null)[][]) => void;
  onClose: () => void;
}) {
  const { t } = useTranslation('plan');
  const { t: common } = useTranslation('common');
  const [mark, setMark] = useState<DecimalMark>(ownMark);
  const marks: DecimalMark[] = ['.', ','];
  return (
    <Dialog
      open
      onClose={onClose}
      title={t('paste.title')}
      lead={t('paste.lead', { example })}
      footer={
        <>
          <Button variant="text" onClick={onClose}>
            {common('cancel')}
          </Button>
          <Button onClick={() => onPick(byMark[mark])}>{t('paste.action')}</Button>
        </>
      }
    >
      <fieldset className="grid grid-cols-2 gap-5">
        <legend className="sr-only">{t('paste.title')}</legend>
        {marks.map((each) => (
          <label key={each} className="block border-t border-rule pt-2">
            <span className="flex items-center gap-2">
              <input
                type="radio"
                name="reading"
                className="accent-moss"
                autoFocus={each === ownMark}
                checked={mark === each}
                onChange={() => setMark(each)}
              />
              <b>{each === '.' ? t('paste.point') : t('paste.comma')}</b>
            </span>
            <table className="mt-2 text-small">
              <tbody>
                {byMark[each].slice(0, 4).map((row, index) => (
                  <tr key={index}>
                    {row.slice(0, 4).map((value, column) => (
                      <td key={column} className="num pr-4">
                        {value === null ? '' : formatNumber(value, 6)}
                      </td>
                    ))}
                  </tr>
                ))}
              </tbody>
            </table>
          </label>
        ))}
      </fieldset>
    </Dialog>
  );
}

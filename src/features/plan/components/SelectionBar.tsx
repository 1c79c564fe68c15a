import { useState, type FormEvent } from 'react';
import { useTranslation } from 'react-i18next';
import { Button } from '../../../components/Button.tsx';
import { formatNumber, formatSigned, formatSignedPercent } from '../../../lib/format.ts';
import type { SelectionFigures } from '../selection-figures.ts';

export type CellOperation = 'set to' | 'add' | 'scale by';
const operations: readonly CellOperation[] = ['set to', 'add', 'scale by'];
const operationKeys = { 'set to': 'setTo', add: 'add', 'scale by': 'scaleBy' } as const;

/** What the selected cells come to, and one change to all of them. */
export function SelectionBar({
  figures,
  lockedVersion,
  mayEdit,
  onApply,
  isWhyOpen,
  onWhy,
}: {
  figures: SelectionFigures | null;
  lockedVersion: number | null;
  mayEdit: boolean;
  /** Says by itself what is wrong; true = done. */
  onApply: (operation: CellOperation, text: string) => boolean;
  isWhyOpen: boolean;
  onWhy: () => void;
}) {
  const { t } = useTranslation('plan');
  const [operation, setOperation] = useState<CellOperation>('scale by');
  const [text, setText] = useState('');
  function onSubmit(event: FormEvent) {
    event.preventDefault();
    if (onApply(operation, text)) setText('');
  }
  return (
    <section
      aria-label={t('selection.label')}
      className="plan-bar flex min-h-12 flex-wrap items-center gap-x-[18px] gap-y-1 border-t border-moss bg-moss-tint px-6 py-1"
    >
      {figures === null ? (
        <p className="text-soft">{t('selection.none')}</p>
      ) : (
        <>
          <Figure label={figures.place} value={t('selection.cells', { count: figures.cells })} isText />
          <Figure label={t('selection.sum')} value={formatNumber(figures.sum)} />
          {figures.againstModel !== null && (
            <Figure label={t('selection.againstModel')} value={describeChange(figures.againstModel)} />
          )}
          {figures.againstLocked !== null && (
            <Figure
              label={t('selection.againstLocked', { version: lockedVersion })}
              value={describeChange(figures.againstLocked)}
            />
          )}
        </>
      )}
      <div className="ml-auto flex flex-wrap items-center gap-x-5 gap-y-1">
        {mayEdit && figures !== null && figures.changeable > 0 && (
          <form className="flex items-center gap-2.5" onSubmit={onSubmit}>
            <fieldset className="flex gap-3">
              <legend className="sr-only">{t('selection.change')}</legend>
              {operations.map((each) => (
                <label
                  key={each}
                  className={`border-b-2 whitespace-nowrap has-[:focus-visible]:outline-2 has-[:focus-visible]:outline-offset-2 has-[:focus-visible]:outline-moss ${
                    operation === each ? 'border-moss font-[640] text-ink' : 'border-transparent text-soft'
                  }`}
                >
                  <input
                    type="radio"
                    name="operation"
                    className="sr-only"
                    checked={operation === each}
                    onChange={() => setOperation(each)}
                  />
                  {t(`operation.${operationKeys[each]}`)}
                </label>
              ))}
            </fieldset>
            <input
              className="blank num !min-h-7 !w-[76px] !px-2 !py-0.5"
              aria-label={t(`selection.value.${operationKeys[operation]}`)}
              placeholder={operation === 'scale by' ? t('selection.factorExample') : undefined}
              inputMode="decimal"
              autoComplete="off"
              value={text}
              onChange={(event) => setText(event.target.value)}
            />
            <Button type="submit" className="!h-7" disabled={text.trim() === ''}>
              {t('selection.apply')}
            </Button>
          </form>
        )}
        {figures !== null && !isWhyOpen && (
          <Button variant="text" onClick={onWhy}>
            {t('why.open')}
          </Button>
        )}
      </div>
    </section>
  );
}

function describeChange({ units, fraction }: { units: number; fraction: number | null }): string {
  return fraction === null ? formatSigned(units) : `${formatSigned(units)} (${formatSignedPercent(fraction)})`;
}

function Figure({ label, value, isText = false }: { label: string; value: string; isText?: boolean }) {
  return (
    <div className={`flex flex-col whitespace-nowrap ${isText ? '' : 'num'}`}>
      <span className="text-[11px]/[14px] text-soft">{label}</span>
      <b className="text-[13px]/[18px]">{value}</b>
    </div>
  );
}

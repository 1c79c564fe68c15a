import { useTranslation } from 'react-i18next';
import { type ColumnMeaning, type ImportDetail, type ImportMapping } from '../../../../shared/contracts/sales.ts';
import { columnMeanings } from '../../../../shared/domain/column-meanings.ts';
import { Button } from '../../../components/Button.tsx';
import { Section } from '../../../components/Page.tsx';
import { ProblemNote } from '../../../components/states.tsx';
import { columnLetter, giveMeaning, listMissing } from '../mapping.ts';
import { useChangeMapping } from '../queries.ts';
import { ReadingOptions } from './ReadingOptions.tsx';

const sureEnough = 0.75;

/** How the file is understood, correctable column by column above its first rows. */
export function FileReading({
  detail,
  mapping,
  obstacle,
  isChanged,
  onChange,
  onRead,
}: {
  detail: ImportDetail;
  mapping: ImportMapping;
  /** What the server still asks for, in words. */
  obstacle: string | null;
  isChanged: boolean;
  onChange: (mapping: ImportMapping) => void;
  /** The server has the changed mapping. */
  onRead: () => void;
}) {
  const { t } = useTranslation('sales');
  const change = useChangeMapping(detail.id);
  const isOpen = detail.state === 'to-check' || (detail.state === 'refused' && detail.mapping !== null);
  const missing = listMissing(mapping);
  const hasGuess = mapping.columns.some(({ confidence, meaning }) => confidence < sureEnough && meaning !== 'ignore');
  const readAgain = async () => {
    try {
      await change.mutateAsync(mapping);
      onRead();
    } catch {
      // Shown beside the button.
    }
  };
  return (
    <Section title={t('reading.title')}>
      <ReadingOptions detail={detail} mapping={mapping} isOpen={isOpen} onChange={onChange} />
      {(missing.length > 0 || obstacle !== null) && (
        <div role="status" className="mt-4 border-l-2 border-madder py-1 pl-3">
          <b className="text-madder">{t('reading.missing.title')}</b>
          <ul>
            {missing.map((part) => (
              <li key={part}>{t(`reading.missing.${part}`)}</li>
            ))}
            {missing.length === 0 && <li>{obstacle}</li>}
          </ul>
        </div>
      )}
      <div className="mt-4 overflow-x-auto pb-1" tabIndex={0} role="region" aria-label={t('reading.columnsCaption')}>
        <SampleTable mapping={mapping} sample={detail.sample} isOpen={isOpen} onChange={onChange} />
      </div>
      {detail.sample.length === 0 && <p className="mt-2 text-soft">{t('reading.noSample')}</p>}
      <p className="mt-2 text-small text-soft">
        {hasGuess && isOpen && `${t('reading.guessHint')} `}
        {isOpen && t('reading.remember')}
      </p>
      {isOpen && (isChanged || change.error) && (
        <div className="mt-3 grid gap-2">
          <div className="flex items-center gap-5">
            <Button variant="quiet" disabled={missing.length > 0 || change.isPending} onClick={() => void readAgain()}>
              {t(change.isPending ? 'reading.busy' : 'reading.again')}
            </Button>
            <Button variant="text" onClick={onRead}>
              {t('reading.undo')}
            </Button>
            <span className="text-soft">{t('reading.changed')}</span>
          </div>
          <ProblemNote error={change.error} />
        </div>
      )}
    </Section>
  );
}

function SampleTable({
  mapping,
  sample,
  isOpen,
  onChange,
}: {
  mapping: ImportMapping;
  sample: string[][];
  isOpen: boolean;
  onChange: (mapping: ImportMapping) => void;
}) {
  const { t } = useTranslation('sales');
  const rows = sample.slice(0, 8);
  return (
    <table className="border-collapse text-small whitespace-nowrap">
      <caption className="sr-only">{t('reading.columnsCaption')}</caption>
      <thead>
        <tr>
          <td />
          {mapping.columns.map((column) => (
            <td key={column.index} className="border-b-[1.5px] border-rule px-1 pb-1 align-bottom">
              <select
                aria-label={t('reading.meaningOf', { letter: columnLetter(column.index), header: column.header })}
                className={`w-full min-w-[104px] px-1.5 py-1 font-[560] ${
                  column.meaning === 'ignore' ? 'bg-transparent text-soft' : 'bg-moss-tint text-moss'
                }`}
                disabled={!isOpen}
                value={column.meaning}
                onChange={(event) => onChange(giveMeaning(mapping, column.index, event.target.value as ColumnMeaning))}
              >
                {columnMeanings.map((meaning) => (
                  <option key={meaning} value={meaning}>
                    {t(`meaning.${meaning}`)}
                  </option>
                ))}
              </select>
              {column.meaning === 'mechanic' && (
                <input
                  type="text"
                  aria-label={t('reading.mechanicOf', { letter: columnLetter(column.index) })}
                  className="mt-1 block w-full min-w-[104px] border-b border-rule bg-sheet px-1.5 py-0.5"
                  disabled={!isOpen}
                  value={column.mechanicName ?? ''}
                  onChange={(event) =>
                    onChange({
                      ...mapping,
                      columns: mapping.columns.map((other) =>
                        other.index === column.index ? { ...other, mechanicName: event.target.value } : other,
                      ),
                    })
                  }
                />
              )}
            </td>
          ))}
        </tr>
        <tr className="text-tiny text-soft">
          <td />
          {mapping.columns.map((column) => (
            <td key={column.index} className="px-2 py-1 text-center">
              {columnLetter(column.index)}
              {column.confidence < sureEnough && column.meaning !== 'ignore' && (
                <span className="ml-1 text-turmeric">{t('reading.guess')}</span>
              )}
            </td>
          ))}
        </tr>
        <tr>
          <td className="num pr-2 text-soft">{mapping.headerRow}</td>
          {mapping.columns.map((column) => (
            <th
              key={column.index}
              scope="col"
              className="border-b border-ink bg-sheet px-2 py-1 text-left font-semibold"
            >
              {column.header}
            </th>
          ))}
        </tr>
      </thead>
      <tbody>
        {rows.map((row, rowIndex) => (
          <tr key={rowIndex}>
            <td className="num pr-2 text-soft">{mapping.headerRow + rowIndex + 1}</td>
            {mapping.columns.map((column) => {
              const text = row[column.index] ?? '';
              return (
                <td
                  key={column.index}
                  className={`max-w-[220px] overflow-hidden border-r border-b border-line bg-sheet px-2 py-1 text-ellipsis ${
                    /^[-+−]?[\d.,\s]+%?$/.test(text) ? 'text-right' : ''
                  } ${column.meaning === 'ignore' ? 'text-soft' : ''}`}
                >
                  {text}
                </td>
              );
            })}
          </tr>
        ))}
      </tbody>
    </table>
  );
}

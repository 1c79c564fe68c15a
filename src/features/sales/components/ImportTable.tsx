import { useTranslation } from 'react-i18next';
import type { ImportSummary } from '../../../../shared/contracts/sales.ts';
import { ActLink, Button } from '../../../components/Button.tsx';
import { Table } from '../../../components/Table.tsx';
import { useCategoryInView, withCategory } from '../../../lib/categories.ts';
import { formatInstant, formatUnits, formatWeekSpan } from '../../../lib/format.ts';
import { ImportStateMark } from './ImportStateMark.tsx';

export function ImportTable({
  imports,
  onWithdraw,
}: {
  imports: ImportSummary[];
  onWithdraw?: (subject: ImportSummary) => void;
}) {
  const { t } = useTranslation('sales');
  const { category } = useCategoryInView();
  const figure = (value: number | null) => (value === null ? '' : formatUnits(value));
  return (
    <Table caption={t('list.caption')}>
      <thead>
        <tr>
          <th scope="col">{t('list.file')}</th>
          <th scope="col">{t('list.state')}</th>
          <th scope="col">{t('list.weeks')}</th>
          <th scope="col" className="num">
            {t('list.rows')}
          </th>
          <th scope="col" className="num">
            {t('list.refused')}
          </th>
          <th scope="col" className="num">
            {t('list.units')}
          </th>
          <th scope="col">{t('list.by')}</th>
          <th scope="col">
            <span className="sr-only">{t('list.does')}</span>
          </th>
        </tr>
      </thead>
      <tbody>
        {imports.map((entry) => (
          <tr key={entry.id}>
            <th scope="row" className="min-w-[170px]">
              <ActLink
                to={withCategory(`/sales/imports/${entry.id}`, category?.id ?? null)}
                className="[overflow-wrap:anywhere]"
              >
                {entry.fileName}
              </ActLink>
              <span className="block text-small text-soft">{t(`kind.${entry.kind}`)}</span>
            </th>
            <td>
              <ImportStateMark state={entry.state} />
            </td>
            <td className="whitespace-nowrap">
              {entry.firstWeek && entry.lastWeek ? formatWeekSpan(entry.firstWeek, entry.lastWeek, t('common:to')) : ''}
            </td>
            <td className="num">{figure(entry.rowsTaken)}</td>
            <td className={`num ${entry.rowsRefused ? 'text-madder' : 'text-soft'}`}>{figure(entry.rowsRefused)}</td>
            <td className="num">{entry.kind === 'sales' ? figure(entry.units) : ''}</td>
            <td className="whitespace-nowrap">
              {formatInstant(entry.at)}
              <span className="block text-small text-soft">{entry.by}</span>
            </td>
            <td className="text-right">
              {entry.state === 'accepted' && onWithdraw && (
                <Button
                  variant="text"
                  aria-label={t('list.withdrawNamed', { name: entry.fileName })}
                  onClick={() => onWithdraw(entry)}
                >
                  {t('list.withdraw')}
                </Button>
              )}
            </td>
          </tr>
        ))}
      </tbody>
    </Table>
  );
}

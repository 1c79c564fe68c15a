import { useTranslation } from 'react-i18next';
import type { FitDiagnosis } from '../../../../shared/contracts/lines.ts';
import { Table } from '../../../components/Table.tsx';
import { formatPercent, formatUnits } from '../../../lib/format.ts';

/** The condition indices that tell something, largest first, with the effects whose variance they carry. */
export function ConditionTable({ condition }: { condition: FitDiagnosis['condition'] }) {
  const { t } = useTranslation('lines');
  const telling = condition.filter(({ shares }) => shares.length > 0).reverse();
  return (
    <div>
      <h3>{t('condition.title')}</h3>
      <Table caption={t('condition.caption')} className="mt-1">
        <thead>
          <tr>
            <th scope="col" className="num">
              {t('condition.index')}
            </th>
            <th scope="col" className="pl-4!">
              {t('condition.shares')}
            </th>
          </tr>
        </thead>
        <tbody>
          {telling.map(({ index, shares }) => (
            <tr key={index}>
              <td className="num">{formatUnits(index, 1)}</td>
              <td className="pl-4!">
                {shares.map(({ name, share }) => `${name} ${formatPercent(share, 0)}`).join(', ')}
              </td>
            </tr>
          ))}
        </tbody>
      </Table>
      <p className="mt-1 text-small text-soft">{t('condition.note', { n: condition.length - telling.length })}</p>
    </div>
  );
}

import { useTranslation } from 'react-i18next';
import type { FitDiagnosis, LineFitView } from '../../../../shared/contracts/lines.ts';
import { Table } from '../../../components/Table.tsx';
import { formatFactor, formatUnits, weekLabel } from '../../../lib/format.ts';

/** The ten weeks without which the fit would change most. */
export function InfluentialWeeks({ rows, names }: { rows: FitDiagnosis['influential']; names: LineFitView['names'] }) {
  const { t } = useTranslation('lines');
  if (rows.length === 0) return null;
  return (
    <div>
      <h3>{t('influence.title')}</h3>
      <Table caption={t('influence.caption')} className="mt-1">
        <thead>
          <tr>
            <th scope="col">{t('influence.item')}</th>
            <th scope="col">{t('influence.location')}</th>
            <th scope="col">{t('influence.week')}</th>
            <th scope="col" className="num">
              {t('influence.sold')}
            </th>
            <th scope="col" className="num">
              {t('influence.leverage')}
            </th>
            <th scope="col" className="num">
              {t('influence.cook')}
            </th>
          </tr>
        </thead>
        <tbody>
          {rows.map((row) => (
            <tr key={`${row.item}-${row.location}-${row.weekStart}`}>
              <th scope="row">{names.items[row.item] ?? row.item}</th>
              <td>{names.locations[row.location] ?? row.location}</td>
              <td>{weekLabel(row.weekStart)}</td>
              <td className="num">{formatFactor(Math.exp(row.residual))}</td>
              <td className="num">{formatUnits(row.leverage, 3)}</td>
              <td className="num">{formatUnits(row.cooksDistance, 3)}</td>
            </tr>
          ))}
        </tbody>
      </Table>
      <p className="mt-1 text-small text-soft">{t('influence.note')}</p>
    </div>
  );
}

import { useTranslation } from 'react-i18next';
import type { FitDiagnosis } from '../../../../shared/contracts/lines.ts';
import { Table } from '../../../components/Table.tsx';
import { formatUnits } from '../../../lib/format.ts';
import { readTests } from '../test-meanings.ts';

const smallestShown = 0.001;

/** Tests of the fit, each with what it means in a sentence. */
export function TestTable({ diagnosis }: { diagnosis: FitDiagnosis }) {
  const { t } = useTranslation('lines');
  const chance = (p: number | null) => {
    if (p === null) return '';
    return p < smallestShown
      ? t('tests.below', { p: formatUnits(smallestShown, 3) })
      : t('tests.p', { p: formatUnits(p, 3) });
  };
  const digits = { 'durbin-watson': 2, 'ljung-box': 1, 'breusch-pagan': 1, condition: 1, leverage: 3 };
  return (
    <div>
      <h3>{t('tests.title')}</h3>
      <Table caption={t('tests.caption')} className="mt-1">
        <thead>
          <tr>
            <th scope="col">{t('tests.test')}</th>
            <th scope="col" className="num">
              {t('tests.value')}
            </th>
          </tr>
        </thead>
        <tbody>
          {readTests(diagnosis).map(({ test, value, degrees, p, meaning }) => (
            <tr key={test}>
              <th scope="row">
                <span className="block font-[560]">{t(`tests.name.${test}`)}</span>
                <span className="block text-soft">
                  {t(`tests.meaning.${test}.${meaning}`, {
                    above: formatUnits(diagnosis.leverage.above),
                    rows: formatUnits(diagnosis.rows),
                    threshold: formatUnits(diagnosis.leverage.threshold, 3),
                    lags: diagnosis.ljungBox?.lags,
                  })}
                </span>
              </th>
              <td className="num">
                <span className="block">
                  {value === null ? t('effects.unknown') : formatUnits(value, digits[test])}
                </span>
                {degrees !== null && (
                  <span className="block text-small text-soft">
                    {t('tests.degrees', { degrees: formatUnits(degrees) })} {chance(p)}
                  </span>
                )}
              </td>
            </tr>
          ))}
        </tbody>
      </Table>
    </div>
  );
}

import { useTranslation } from 'react-i18next';
import type { FitDiagnosis, LineFitView } from '../../../../shared/contracts/lines.ts';
import { Table } from '../../../components/Table.tsx';
import { formatUnits } from '../../../lib/format.ts';

const kinds = ['classical', 'hc1', 'hc3', 'week', 'neweyWest'] as const;

/** Coefficients in ln units with their 95 % range, five kinds of standard error and the inflation of their variance. */
export function CoefficientErrors({
  coefficients,
  diagnosis,
}: {
  coefficients: NonNullable<LineFitView['fit']>['coefficients'];
  diagnosis: FitDiagnosis;
}) {
  const { t } = useTranslation('lines');
  const figure = (value: number | null | undefined, digits: number) =>
    value === null || value === undefined ? t('effects.unknown') : formatUnits(value, digits);
  const effectOf = new Map(diagnosis.effects.map((effect) => [effect.name, effect]));
  return (
    <div>
      <h3>{t('expert.coefficients')}</h3>
      <div className="mt-1 overflow-x-auto" tabIndex={0} role="region" aria-label={t('expert.caption')}>
        <Table caption={t('expert.caption')}>
          <thead>
            <tr>
              <th scope="col">{t('expert.name')}</th>
              <th scope="col">{t('expert.group')}</th>
              <th scope="col" className="num">
                {t('expert.estimate')}
              </th>
              <th scope="col" className="num">
                {t('expert.low')}
              </th>
              <th scope="col" className="num">
                {t('expert.high')}
              </th>
              {kinds.map((kind) => (
                <th key={kind} scope="col" className="num">
                  {t(`expert.error.${kind}`, { lag: diagnosis.neweyWestLag })}
                </th>
              ))}
              <th scope="col" className="num">
                {t('expert.inflation')}
              </th>
            </tr>
          </thead>
          <tbody>
            {coefficients.map(({ name, group, estimate, low95, high95 }) => {
              const effect = effectOf.get(name);
              return (
                <tr key={name}>
                  <th scope="row">{name}</th>
                  <td className="text-soft">{t(`group.${group}`, { defaultValue: group })}</td>
                  <td className="num font-[560]">{formatUnits(estimate, 4)}</td>
                  <td className="num text-soft">{formatUnits(low95, 4)}</td>
                  <td className="num text-soft">{formatUnits(high95, 4)}</td>
                  {kinds.map((kind) => (
                    <td key={kind} className="num">
                      {figure(effect?.errors?.[kind], 4)}
                    </td>
                  ))}
                  <td className="num">{figure(effect?.varianceInflation, 1)}</td>
                </tr>
              );
            })}
          </tbody>
        </Table>
      </div>
      <p className="mt-2 max-w-[900px] text-small text-soft">{t('expert.note')}</p>
    </div>
  );
}

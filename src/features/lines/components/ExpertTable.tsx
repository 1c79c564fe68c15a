import { useState } from 'react';
import { useTranslation } from 'react-i18next';
import type { LineFitView } from '../../../../shared/contracts/lines.ts';
import { Button } from '../../../components/Button.tsx';
import { Section } from '../../../components/Page.tsx';
import { Table } from '../../../components/Table.tsx';
import { formatUnits } from '../../../lib/format.ts';

export function ExpertTable({ coefficients }: { coefficients: NonNullable<LineFitView['fit']>['coefficients'] }) {
  const { t } = useTranslation('lines');
  const [isOpen, setOpen] = useState(false);
  return (
    <Section
      title={t('expert.title')}
      aside={
        <Button variant="text" aria-expanded={isOpen} onClick={() => setOpen(!isOpen)}>
          {t(isOpen ? 'expert.close' : 'expert.open')}
        </Button>
      }
    >
      {isOpen && (
        <>
          <Table caption={t('expert.caption')}>
            <thead>
              <tr>
                <th scope="col">{t('expert.name')}</th>
                <th scope="col">{t('expert.group')}</th>
                <th scope="col" className="num">
                  {t('expert.estimate')}
                </th>
                <th scope="col" className="num">
                  {t('expert.standardError')}
                </th>
                <th scope="col" className="num">
                  {t('expert.low')}
                </th>
                <th scope="col" className="num">
                  {t('expert.high')}
                </th>
              </tr>
            </thead>
            <tbody>
              {coefficients.map((coefficient) => (
                <tr key={coefficient.name}>
                  <th scope="row">{coefficient.name}</th>
                  <td className="text-soft">{t(`group.${coefficient.group}`, { defaultValue: coefficient.group })}</td>
                  <td className="num">{formatUnits(coefficient.estimate, 4)}</td>
                  <td className="num">{formatUnits(coefficient.standardError, 4)}</td>
                  <td className="num">{formatUnits(coefficient.low95, 4)}</td>
                  <td className="num">{formatUnits(coefficient.high95, 4)}</td>
                </tr>
              ))}
            </tbody>
          </Table>
          <p className="mt-2 text-small text-soft">{t('expert.note')}</p>
        </>
      )}
    </Section>
  );
}

import { useState } from 'react';
import { useTranslation } from 'react-i18next';
import type { LineFitView } from '../../../../shared/contracts/lines.ts';
import { Button } from '../../../components/Button.tsx';
import { Section } from '../../../components/Page.tsx';
import { Table } from '../../../components/Table.tsx';
import { formatPercent, formatSignedPercent, formatUnits } from '../../../lib/format.ts';

const few = 6;

/** The specifications that were compared, best first: which was chosen, which are averaged in, how far the others are behind. */
export function RivalTable({ fit }: { fit: NonNullable<LineFitView['fit']> }) {
  const { t } = useTranslation('lines');
  const [areAllShown, setAllShown] = useState(false);
  const { name, averagedWith } = fit.specification;
  const averaged: readonly unknown[] = Array.isArray(averagedWith) ? averagedWith : [];
  const shown = fit.scores.filter(
    ({ specification }, rank) =>
      areAllShown || rank < few || specification === name || averaged.includes(specification),
  );
  const best = Math.min(...fit.scores.map(({ crps }) => crps));
  return (
    <Section title={t('scores.title')}>
      <Table caption={t('scores.caption')}>
        <thead>
          <tr>
            <th scope="col">{t('scores.specification')}</th>
            <th scope="col" className="num">
              {t('scores.crps')}
            </th>
            <th scope="col" className="num">
              {t('scores.behind')}
            </th>
            <th scope="col" className="num">
              {t('scores.wape')}
            </th>
          </tr>
        </thead>
        <tbody>
          {shown.map(({ specification, crps, wape }) => {
            const isChosen = specification === name;
            return (
              <tr key={specification} className={isChosen ? 'font-[600]' : undefined}>
                <th scope="row" className={isChosen ? 'font-[600]!' : undefined}>
                  {specification}
                  {isChosen && <span className="ml-2 text-small font-normal text-moss">{t('scores.chosen')}</span>}
                  {averaged.includes(specification) && (
                    <span className="ml-2 text-small text-moss">{t('scores.averaged')}</span>
                  )}
                </th>
                <td className="num">{formatUnits(crps, 1)}</td>
                <td className="num text-soft">{best > 0 && crps > best ? formatSignedPercent(crps / best - 1) : ''}</td>
                <td className="num">{formatPercent(wape)}</td>
              </tr>
            );
          })}
        </tbody>
      </Table>
      {fit.scores.length > few && (
        <Button variant="text" onClick={() => setAllShown(!areAllShown)}>
          {areAllShown ? t('scores.fewer') : t('scores.all', { n: fit.scores.length })}
        </Button>
      )}
      <p className="mt-2 text-small text-soft">{t('scores.note')}</p>
    </Section>
  );
}

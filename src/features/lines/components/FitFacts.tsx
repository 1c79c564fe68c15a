import { useTranslation } from 'react-i18next';
import type { LineFitView } from '../../../../shared/contracts/lines.ts';
import { Section } from '../../../components/Page.tsx';
import { Table } from '../../../components/Table.tsx';
import { formatPercent, formatUnits } from '../../../lib/format.ts';

export function FitFacts({ fit }: { fit: NonNullable<LineFitView['fit']> }) {
  const { t } = useTranslation('lines');
  const name = fit.specification.name;
  const facts: [string, string][] = [
    [t('facts.rows'), formatUnits(fit.rows)],
    [t('facts.rank'), formatUnits(fit.rank)],
    [t('facts.explained'), formatPercent(fit.rSquared)],
    [t('facts.sigma'), t('facts.sigmaValue', { share: formatPercent(Math.exp(fit.sigma) - 1, 0) })],
    [t('facts.aic'), formatUnits(fit.aic, 1)],
  ];
  if (fit.seconds > 0) {
    facts.push([t('facts.seconds'), t('facts.secondsValue', { seconds: formatUnits(fit.seconds, 1) })]);
  }
  if (typeof name === 'string') facts.push([t('facts.specification'), name]);
  return (
    <>
      <Section title={t('facts.title')}>
        <dl>
          {facts.map(([term, value]) => (
            <div key={term} className="flex items-baseline justify-between gap-6 border-b border-line py-1.5">
              <dt className="text-soft">{term}</dt>
              <dd className="text-right font-[560]">{value}</dd>
            </div>
          ))}
        </dl>
      </Section>
      {fit.scores.length > 0 && (
        <Section title={t('scores.title')}>
          <Table caption={t('scores.caption')}>
            <thead>
              <tr>
                <th scope="col">{t('scores.specification')}</th>
                <th scope="col" className="num">
                  {t('scores.crps')}
                </th>
                <th scope="col" className="num">
                  {t('scores.wape')}
                </th>
              </tr>
            </thead>
            <tbody>
              {fit.scores.map((score) => (
                <tr key={score.specification}>
                  <th scope="row">{score.specification}</th>
                  <td className="num">{formatUnits(score.crps, 1)}</td>
                  <td className="num">{formatPercent(score.wape)}</td>
                </tr>
              ))}
            </tbody>
          </Table>
        </Section>
      )}
    </>
  );
}

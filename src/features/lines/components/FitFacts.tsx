import { useTranslation } from 'react-i18next';
import type { LineFitView } from '../../../../shared/contracts/lines.ts';
import { Section } from '../../../components/Page.tsx';
import { formatPercent, formatUnits } from '../../../lib/format.ts';
import { RivalTable } from './RivalTable.tsx';

export function FitFacts({ fit }: { fit: NonNullable<LineFitView['fit']> }) {
  const { t } = useTranslation('lines');
  const { name } = fit.specification;
  const { diagnosis } = fit;
  const facts: [string, string][] = [
    [t('facts.rows'), formatUnits(fit.rows)],
    [t('facts.rank'), formatUnits(fit.rank)],
    ...(diagnosis
      ? ([[t('facts.parameters'), formatUnits(diagnosis.parameters, 1)]] satisfies [string, string][])
      : []),
    [t('facts.explained'), formatPercent(fit.rSquared)],
    [t('facts.sigma'), t('facts.sigmaValue', { share: formatPercent(Math.exp(fit.sigma) - 1, 0) })],
  ];
  if (diagnosis && diagnosis.adjustedRSquaredWithin !== null) {
    facts.push([t('facts.adjusted'), formatPercent(diagnosis.adjustedRSquaredWithin)]);
  }
  const aic = diagnosis ? diagnosis.likelihood?.aic : fit.aic;
  if (aic !== undefined) facts.push([t('facts.aic'), formatUnits(aic, 1)]);
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
      {fit.scores.length > 0 && <RivalTable fit={fit} />}
    </>
  );
}

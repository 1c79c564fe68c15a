import { useTranslation } from 'react-i18next';
import type { LineFitView } from '../../../../shared/contracts/lines.ts';
import { Section } from '../../../components/Page.tsx';
import { formatPercent, formatUnits } from '../../../lib/format.ts';
import { readExplainedShare } from '../effects.ts';

export function FitFacts({ fit }: { fit: NonNullable<LineFitView['fit']> }) {
  const { t } = useTranslation('lines');
  const { diagnosis, specification } = fit;
  const aic = diagnosis ? diagnosis.likelihood?.aic : fit.aic;
  const facts: [string, string | false][] = [
    [t('facts.rows'), formatUnits(fit.rows)],
    [t('facts.rank'), formatUnits(fit.rank)],
    [t('facts.parameters'), diagnosis !== null && formatUnits(diagnosis.parameters, 1)],
    [t('facts.explained'), formatPercent(readExplainedShare(fit))],
    [
      t('facts.adjusted'),
      typeof diagnosis?.adjustedRSquaredWithin === 'number' && formatPercent(diagnosis.adjustedRSquaredWithin),
    ],
    [t('facts.sigma'), t('facts.sigmaValue', { share: formatPercent(Math.exp(fit.sigma) - 1, 0) })],
    [t('facts.aic'), aic !== undefined && formatUnits(aic, 1)],
    [t('facts.seconds'), fit.seconds > 0 && t('facts.secondsValue', { seconds: formatUnits(fit.seconds, 1) })],
    [t('facts.specification'), typeof specification.name === 'string' && specification.name],
  ];
  return (
    <Section title={t('facts.title')}>
      <dl>
        {facts
          .filter(([, value]) => value !== false)
          .map(([term, value]) => (
            <div key={term} className="flex items-baseline justify-between gap-6 border-b border-line py-1.5">
              <dt className="shrink-0 text-soft">{term}</dt>
              <dd className="text-right font-[560]">{value}</dd>
            </div>
          ))}
      </dl>
    </Section>
  );
}

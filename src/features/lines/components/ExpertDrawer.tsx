import { useId, useState } from 'react';
import { useTranslation } from 'react-i18next';
import type { FitDiagnosis, LineFitView } from '../../../../shared/contracts/lines.ts';
import { Button } from '../../../components/Button.tsx';
import { Section } from '../../../components/Page.tsx';
import { formatUnits } from '../../../lib/format.ts';
import { CoefficientErrors } from './CoefficientErrors.tsx';
import { ConditionTable } from './ConditionTable.tsx';
import { InfluentialWeeks } from './InfluentialWeeks.tsx';
import { TestTable } from './TestTable.tsx';

/** What an expert asks of the fit: errors of five kinds, collinearity, tests, criteria, influence. Closed at first. */
export function ExpertDrawer({
  fit,
  diagnosis,
  names,
}: {
  fit: NonNullable<LineFitView['fit']>;
  diagnosis: FitDiagnosis;
  names: LineFitView['names'];
}) {
  const { t } = useTranslation('lines');
  const [isOpen, setOpen] = useState(false);
  const id = useId();
  return (
    <Section
      title={t('expert.title')}
      aside={
        <Button variant="text" aria-expanded={isOpen} aria-controls={id} onClick={() => setOpen(!isOpen)}>
          {t(isOpen ? 'expert.close' : 'expert.open')}
        </Button>
      }
    >
      <div id={id} hidden={!isOpen}>
        {isOpen && (
          <div className="grid grid-cols-1 gap-x-11 gap-y-7 min-[1100px]:grid-cols-2">
            <div className="min-[1100px]:col-span-2">
              <CoefficientErrors coefficients={fit.coefficients} diagnosis={diagnosis} />
            </div>
            <TestTable diagnosis={diagnosis} />
            <div className="grid min-w-0 content-start gap-7">
              <Criteria diagnosis={diagnosis} />
              <ConditionTable condition={diagnosis.condition} />
            </div>
            <div className="min-[1100px]:col-span-2">
              <InfluentialWeeks rows={diagnosis.influential} names={names} />
            </div>
          </div>
        )}
      </div>
    </Section>
  );
}

function Criteria({ diagnosis }: { diagnosis: FitDiagnosis }) {
  const { t } = useTranslation('lines');
  const figure = (value: number | null, digits: number) =>
    value === null ? t('effects.unknown') : formatUnits(value, digits);
  const { likelihood } = diagnosis;
  const facts: [string, string][] = [
    [t('criteria.within'), figure(diagnosis.rSquaredWithin, 4)],
    [t('criteria.adjustedWithin'), figure(diagnosis.adjustedRSquaredWithin, 4)],
    [t('criteria.whole'), figure(diagnosis.rSquared, 4)],
    [t('criteria.adjustedWhole'), figure(diagnosis.adjustedRSquared, 4)],
    [t('criteria.parameters'), figure(diagnosis.parameters, 1)],
    [t('criteria.degrees'), figure(diagnosis.residualDegrees, 1)],
    ...(likelihood
      ? ([
          [t('criteria.logLikelihood'), figure(likelihood.logLikelihood, 2)],
          [t('criteria.aic'), figure(likelihood.aic, 2)],
          [t('criteria.aicc'), figure(likelihood.aicc, 2)],
          [t('criteria.bic'), figure(likelihood.bic, 2)],
        ] as [string, string][])
      : []),
  ];
  return (
    <div>
      <h3>{t('criteria.title')}</h3>
      <dl className="mt-1 grid grid-cols-1 gap-x-8 sm:grid-cols-2">
        {facts.map(([term, value], index) => (
          <div key={index} className="flex items-baseline justify-between gap-4 border-b border-line py-1">
            <dt className="text-soft">{term}</dt>
            <dd className="num">{value}</dd>
          </div>
        ))}
      </dl>
      {!likelihood && <p className="mt-1 text-small text-soft">{t('criteria.noLikelihood')}</p>}
    </div>
  );
}

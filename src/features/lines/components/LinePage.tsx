import { useQuery } from '@tanstack/react-query';
import { useTranslation } from 'react-i18next';
import { useParams } from 'react-router-dom';
import type { LineFitView } from '../../../../shared/contracts/lines.ts';
import { weekLabel } from '../../../../shared/domain/weeks.ts';
import { ActLink } from '../../../components/Button.tsx';
import { Page, PageHead } from '../../../components/Page.tsx';
import { JobProgress } from '../../../components/ProgressBar.tsx';
import { EmptyState, QueryStates } from '../../../components/states.tsx';
import { describeError } from '../../../lib/api.ts';
import { withCategory } from '../../../lib/categories.ts';
import { formatInstant, formatPercent, formatUnits } from '../../../lib/format.ts';
import { useTitle } from '../../../lib/use-title.ts';
import { readExplainedShare } from '../effects.ts';
import { lineFitQuery } from '../queries.ts';
import { EffectTable } from './EffectTable.tsx';
import { ExpertDrawer } from './ExpertDrawer.tsx';
import { FindingList } from './FindingList.tsx';
import { FitFacts } from './FitFacts.tsx';
import { LineOutlook } from './LineOutlook.tsx';
import { RivalTable } from './RivalTable.tsx';

export function LinePage() {
  const { t } = useTranslation('lines');
  const lineId = Number(useParams().lineId);
  const view = useQuery(lineFitQuery(lineId));
  useTitle(view.data ? t('tab', { line: view.data.line.name }) : view.error ? describeError(view.error).title : null);
  return (
    <Page>
      <QueryStates isPage query={view} loading={t('loading')}>
        {(answer) => <LineView view={answer} />}
      </QueryStates>
    </Page>
  );
}

function LineView({ view }: { view: LineFitView }) {
  const { t } = useTranslation('lines');
  const { fit, line, category, names } = view;
  return (
    <>
      <PageHead
        title={t('title', { line: line.name })}
        lead={
          fit &&
          t('lead', {
            id: fit.id,
            when: formatInstant(fit.at),
            rows: formatUnits(fit.rows),
            week: weekLabel(fit.salesTo),
            explained: formatPercent(readExplainedShare(fit), 0),
          })
        }
        actions={<ActLink to={withCategory(`/plan/${line.id}`, category.id)}>{t('toPlan')}</ActLink>}
      />
      {view.activeJob && (
        <div className="mt-3">
          <JobProgress job={view.activeJob} />
        </div>
      )}
      {fit === null ? (
        <div className="mt-4">
          <EmptyState title={t('noFitTitle')}>{t('noFit')}</EmptyState>
        </div>
      ) : (
        <div className="mt-4 grid grid-cols-1 gap-x-11 gap-y-8 min-[1100px]:grid-cols-[minmax(0,7fr)_minmax(0,5fr)]">
          <div className="grid min-w-0 grid-cols-[minmax(0,1fr)] content-start gap-8">
            <EffectTable fit={fit} names={names} />
            {fit.scores.length > 0 && <RivalTable fit={fit} />}
          </div>
          <div className="grid min-w-0 grid-cols-[minmax(0,1fr)] content-start gap-8">
            <LineOutlook lineId={line.id} />
            <FitFacts fit={fit} />
            <FindingList findings={fit.findings} names={names} />
            <p className="text-small text-soft">{t('caution')}</p>
          </div>
          {fit.diagnosis && (
            <div className="min-w-0 min-[1100px]:col-span-2">
              <ExpertDrawer fit={fit} diagnosis={fit.diagnosis} names={names} />
            </div>
          )}
        </div>
      )}
    </>
  );
}

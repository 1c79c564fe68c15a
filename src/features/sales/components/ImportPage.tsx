import { useQuery } from '@tanstack/react-query';
import { useState } from 'react';
import { useTranslation } from 'react-i18next';
import { useParams } from 'react-router-dom';
import type { ImportDetail, ImportMapping } from '../../../../shared/contracts/sales.ts';
import { ActLink } from '../../../components/Button.tsx';
import { Page, PageHead, Section } from '../../../components/Page.tsx';
import { JobProgress } from '../../../components/ProgressBar.tsx';
import { QueryStates } from '../../../components/states.tsx';
import { useCategoryInView, withCategory } from '../../../lib/categories.ts';
import { formatBytes, formatInstant, formatWeekSpan } from '../../../lib/format.ts';
import { useJob } from '../../../lib/jobs.ts';
import { useTitle } from '../../../lib/use-title.ts';
import { isSameMapping } from '../mapping.ts';
import { importQuery, useRefreshAfterImport } from '../queries.ts';
import { FileReading } from './FileReading.tsx';
import { Findings } from './Findings.tsx';
import { ImportBar } from './ImportBar.tsx';
import { ImportRoute } from './ImportRoute.tsx';
import { NewNames } from './NewNames.tsx';
import { WeeksBeside } from './WeeksBeside.tsx';

export function ImportPage() {
  const { t } = useTranslation('sales');
  const importId = Number(useParams().importId);
  const detail = useQuery(importQuery(importId));
  useTitle(detail.data?.fileName ?? t('titleNone'));
  if (detail.data) return <OneImport key={importId} detail={detail.data} />;
  return (
    <Page>
      <QueryStates isPage query={detail} loading={t('page.loading')}>
        {() => null}
      </QueryStates>
    </Page>
  );
}

function OneImport({ detail }: { detail: ImportDetail }) {
  const { t } = useTranslation('sales');
  const { category } = useCategoryInView();
  const refresh = useRefreshAfterImport();
  const job = useJob(detail.activeJob?.id ?? null, refresh) ?? detail.activeJob;
  const [draft, setDraft] = useState<ImportMapping | null>(null);
  const [isYes, setYes] = useState(false);
  const mapping = draft ?? detail.mapping;
  const isChanged = draft !== null && detail.mapping !== null && !isSameMapping(draft, detail.mapping);
  const isOpen = detail.state === 'to-check';
  const obstacle = isOpen ? (detail.findings.find(({ kind }) => kind === 'mapping-incomplete')?.detail ?? null) : null;
  const hasNewNames =
    detail.unknown !== null &&
    Object.values(detail.unknown).some((names: readonly unknown[]) => names.length > 0) &&
    isOpen;

  return (
    <Page className="!pb-0">
      <PageHead
        title={<span className="break-all">{detail.fileName}</span>}
        lead={
          <>
            {t('page.broughtIn', {
              when: formatInstant(detail.at),
              by: detail.by,
              size: formatBytes(detail.sizeBytes),
            })}{' '}
            {detail.state === 'accepted' && detail.acceptedAt
              ? t('page.acceptedAt', { when: formatInstant(detail.acceptedAt) })
              : detail.state === 'withdrawn'
                ? t('page.withdrawnNote')
                : t('page.nothingAccepted')}{' '}
            <ActLink to={withCategory('/sales', category?.id ?? null)}>{t('page.back')}</ActLink>
          </>
        }
        actions={<ImportRoute state={detail.state} />}
      />
      <div className="mt-3 grid gap-3">
        {job && <JobProgress job={job} />}
        {detail.sameFileAs !== null && (
          <p className="border-l-2 border-turmeric py-1 pl-3">
            {t('page.sameFile')}{' '}
            <ActLink to={withCategory(`/sales/imports/${detail.sameFileAs}`, category?.id ?? null)}>
              {t('page.sameFileLink')}
            </ActLink>
          </p>
        )}
        {detail.lockedWeeks.length > 0 && isOpen && (
          <p className="border-l-2 border-ink py-1 pl-3">
            {t(`page.locked.${mapping?.kind ?? detail.kind}`, {
              count: detail.lockedWeeks.length,
              weeks: formatWeekSpan(detail.lockedWeeks[0] ?? '', detail.lockedWeeks.at(-1) ?? '', t('common:and')),
            })}
          </p>
        )}
        {detail.refusal !== null && (
          <div role="alert" className="max-w-[720px] border-l-2 border-madder py-1 pl-3">
            <h2 className="text-madder">{t('page.refusedTitle')}</h2>
            <p>{detail.refusal}</p>
          </div>
        )}
      </div>

      {mapping && (
        <div className="mt-4 grid grid-cols-1 gap-x-10 gap-y-8 min-[1100px]:grid-cols-[minmax(0,7fr)_minmax(0,5fr)]">
          <div className="grid min-w-0 grid-cols-[minmax(0,1fr)] content-start gap-8">
            <FileReading
              detail={detail}
              obstacle={isChanged ? null : obstacle}
              mapping={mapping}
              isChanged={isChanged}
              onChange={setDraft}
              onRead={() => setDraft(null)}
            />
            {detail.totals && detail.totals.byWeek.length > 0 && (
              <WeeksBeside totals={detail.totals} isSales={mapping.kind === 'sales'} />
            )}
          </div>
          <div className="grid min-w-0 grid-cols-[minmax(0,1fr)] content-start gap-8">
            {hasNewNames && detail.unknown && <NewNames unknown={detail.unknown} isYes={isYes} onYes={setYes} />}
            {detail.totals && (
              <Section title={t('findings.title')}>
                <Findings detail={detail} />
              </Section>
            )}
          </div>
        </div>
      )}
      <ImportBar
        detail={detail}
        isChanged={isChanged}
        obstacle={detail.totals === null || isYes ? obstacle : null}
        isYesMissing={hasNewNames && !isYes}
        createUnknown={isYes}
      />
    </Page>
  );
}

import { useQuery } from '@tanstack/react-query';
import { useTranslation } from 'react-i18next';
import type { Job } from '../../../../shared/contracts/jobs.ts';
import type { PackList } from '../../../../shared/contracts/packs.ts';
import { Page, PageHead, Section } from '../../../components/Page.tsx';
import { JobProgress } from '../../../components/ProgressBar.tsx';
import { EmptyState, QueryStates } from '../../../components/states.tsx';
import { showToast } from '../../../components/toasts.ts';
import { useCategoryInView } from '../../../lib/categories.ts';
import { useJob } from '../../../lib/jobs.ts';
import { useTitle } from '../../../lib/use-title.ts';
import { packsQuery, useBuildPack, useRefreshPacks } from '../queries.ts';
import { PackBuilder } from './PackBuilder.tsx';
import { PackTable } from './PackTable.tsx';

export function PacksPage() {
  const { t } = useTranslation('packs');
  const { category } = useCategoryInView();
  const title = category ? t('title', { category: category.name }) : t('titleNone');
  useTitle(title);
  const packs = useQuery({ ...packsQuery(category?.id ?? 0), enabled: category !== null });
  return (
    <Page>
      <PageHead title={title} lead={t('lead')} />
      <div className="mt-4">
        {category === null ? (
          <EmptyState title={t('noCategoryTitle')}>{t('noCategory')}</EmptyState>
        ) : (
          <QueryStates query={packs} loading={t('loading')}>
            {(list) => <Packs key={category.id} categoryId={category.id} categoryName={category.name} list={list} />}
          </QueryStates>
        )}
      </div>
    </Page>
  );
}

function Packs({ categoryId, categoryName, list }: { categoryId: number; categoryName: string; list: PackList }) {
  const { t } = useTranslation('packs');
  const build = useBuildPack();
  const refresh = useRefreshPacks(categoryId);
  const jobId = build.data?.id ?? list.activeJob?.id ?? null;
  const nextNumber = Math.max(0, ...list.packs.map(({ number }) => number)) + 1;
  const onEnd = (job: Job) => {
    refresh();
    if (job.state === 'done') showToast({ tone: 'done', text: t('build.done', { number: nextNumber }) });
  };
  const job = useJob(jobId, onEnd);
  const isWorking = job !== null && job.state !== 'done';
  return (
    <div
      className={`grid grid-cols-1 gap-x-12 gap-y-8 ${list.mayBuild ? 'min-[1200px]:grid-cols-[minmax(0,8fr)_minmax(0,5fr)]' : 'max-w-[1000px]'}`}
    >
      <Section title={t('list.title')}>
        {list.packs.length === 0 ? (
          <EmptyState title={t('list.emptyTitle')}>{t('list.empty')}</EmptyState>
        ) : (
          <PackTable packs={list.packs} categoryName={categoryName} mayDownload={list.mayDownload} />
        )}
        <p className="mt-3 max-w-[640px] text-small text-soft">
          {t('holds')} {!list.mayBuild && t('build.notYours')}
        </p>
      </Section>
      {(list.mayBuild || isWorking) && (
        <Section title={t('build.title', { number: nextNumber })} aside={t('build.lead')}>
          {isWorking && (
            <div className="mb-4">
              <JobProgress job={job} />
            </div>
          )}
          {list.mayBuild && list.offer && (
            <PackBuilder
              key={list.offer.lines.map(({ id, lockedVersion }) => `${id}:${lockedVersion ?? ''}`).join()}
              categoryId={categoryId}
              offer={list.offer}
              isBusy={build.isPending || (isWorking && job.state !== 'failed')}
              error={build.error}
              onBuild={(body) => build.mutate(body)}
            />
          )}
        </Section>
      )}
    </div>
  );
}

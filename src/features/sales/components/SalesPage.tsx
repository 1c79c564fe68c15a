import { useQuery } from '@tanstack/react-query';
import { useState } from 'react';
import { useTranslation } from 'react-i18next';
import type { ImportList, ImportSummary } from '../../../../shared/contracts/sales.ts';
import { addWeeks } from '../../../../shared/domain/weeks.ts';
import { Page, PageHead, Section } from '../../../components/Page.tsx';
import { EmptyState, QueryStates } from '../../../components/states.tsx';
import { Weekline, WeeklineRoom } from '../../../components/Weekline.tsx';
import { useCategoryInView } from '../../../lib/categories.ts';
import { categoryPlanQuery } from '../../../lib/category-plan.ts';
import { useTitle } from '../../../lib/use-title.ts';
import { importsQuery } from '../queries.ts';
import { DataHealth } from './DataHealth.tsx';
import { DropArea } from './DropArea.tsx';
import { ImportTable } from './ImportTable.tsx';
import { WithdrawDialog } from './WithdrawDialog.tsx';

export function SalesPage() {
  const { t } = useTranslation('sales');
  const { category } = useCategoryInView();
  const title = category ? t('title', { category: category.name }) : t('titleNone');
  useTitle(title);
  const imports = useQuery(importsQuery(category?.id ?? null));
  const plan = useQuery({ ...categoryPlanQuery(category?.id ?? 0), enabled: category !== null });
  const weekline = plan.data?.weekline;
  return (
    <Page
      weekline={
        weekline && weekline.sold.length > 0 ? (
          <Weekline
            weekline={weekline}
            title={plan.data?.category.name ?? ''}
            range={{
              firstWeek: weekline.firstWeek,
              lastWeek: addWeeks(weekline.firstWeek, weekline.sold.length - 1),
            }}
          />
        ) : (
          plan.isLoading && <WeeklineRoom />
        )
      }
    >
      <PageHead title={title} lead={t('lead')} />
      <div className="mt-4">
        <QueryStates query={imports} loading={t('loading')}>
          {(list) => <Overview list={list} />}
        </QueryStates>
      </div>
    </Page>
  );
}

function Overview({ list }: { list: ImportList }) {
  const { t } = useTranslation('sales');
  const [withdrawing, setWithdrawing] = useState<ImportSummary | null>(null);
  return (
    <div className="grid grid-cols-1 gap-x-12 gap-y-8 min-[1100px]:grid-cols-[minmax(0,1fr)_320px]">
      <div>
        {list.mayImport && <DropArea />}
        <Section title={t('list.title')} className={list.mayImport ? 'mt-6' : ''}>
          {list.imports.length === 0 ? (
            <EmptyState title={t('list.emptyTitle')}>
              {t(list.mayImport ? 'list.empty' : 'list.emptyViewer')}
            </EmptyState>
          ) : (
            <ImportTable imports={list.imports} onWithdraw={list.mayImport ? setWithdrawing : undefined} />
          )}
        </Section>
        {!list.mayImport && <p className="mt-4 text-small text-soft">{t('drop.notYours')}</p>}
      </div>
      <DataHealth health={list.health} />
      {withdrawing && <WithdrawDialog subject={withdrawing} onClose={() => setWithdrawing(null)} />}
    </div>
  );
}

import { useState } from 'react';
import { useTranslation } from 'react-i18next';
import type { Category } from '../../../../shared/contracts/lines.ts';
import { ActLink, Button } from '../../../components/Button.tsx';
import { TextField } from '../../../components/fields.tsx';
import { PageHead, Section } from '../../../components/Page.tsx';
import { EmptyState, ProblemNote } from '../../../components/states.tsx';
import { showToast } from '../../../components/toasts.ts';
import { useCategories, withCategory } from '../../../lib/categories.ts';
import { weekLabel } from '../../../lib/format.ts';
import { useMay } from '../../../lib/session.ts';
import { useCreateCategory, useCreateLine } from '../queries.ts';

export function RangeSettings() {
  const { t } = useTranslation('settings');
  const { categories } = useCategories();
  const may = useMay();
  const create = useCreateCategory();
  const mayAddCategory = may('administer', null);
  return (
    <>
      <PageHead title={t('part.range')} lead={t('range.lead')} />
      <div className="mt-5 grid max-w-[880px] gap-8">
        {categories.length === 0 && (
          <EmptyState title={t('range.emptyTitle')}>
            {t(mayAddCategory ? 'range.empty' : 'range.emptyOther')}
          </EmptyState>
        )}
        {categories.map((category) => (
          <CategoryRange key={category.id} category={category} mayAddLine={may('create-range', category.id)} />
        ))}
        {mayAddCategory && (
          <Section title={t('range.addCategory')}>
            <NameForm
              label={t('range.categoryName')}
              error={create.error}
              isBusy={create.isPending}
              onAdd={async (name) => {
                await create.mutateAsync(name);
                showToast({ tone: 'done', text: t('range.categoryAdded', { name }) });
              }}
            />
          </Section>
        )}
      </div>
    </>
  );
}

function CategoryRange({ category, mayAddLine }: { category: Category; mayAddLine: boolean }) {
  const { t } = useTranslation('settings');
  const create = useCreateLine();
  return (
    <Section
      title={category.name}
      aside={
        category.lastSalesWeek ? t('range.lastSales', { week: weekLabel(category.lastSalesWeek) }) : t('range.noSales')
      }
    >
      {category.lines.length === 0 ? (
        <p className="text-soft">{t('range.noLines')}</p>
      ) : (
        <ul className="grid grid-cols-2 gap-x-8 min-[1280px]:grid-cols-3">
          {category.lines.map((line) => (
            <li key={line.id} className="border-b border-line py-1.5">
              <ActLink to={withCategory(`/lines/${line.id}`, category.id)} className="!font-normal !text-ink">
                {line.name}
              </ActLink>
            </li>
          ))}
        </ul>
      )}
      {mayAddLine && (
        <div className="mt-3">
          <NameForm
            label={t('range.lineName', { category: category.name })}
            error={create.error}
            isBusy={create.isPending}
            onAdd={async (name) => {
              await create.mutateAsync({ categoryId: category.id, name });
              showToast({ tone: 'done', text: t('range.lineAdded', { name }) });
            }}
          />
        </div>
      )}
    </Section>
  );
}

function NameForm({
  label,
  error,
  isBusy,
  onAdd,
}: {
  label: string;
  error: unknown;
  isBusy: boolean;
  onAdd: (name: string) => Promise<void>;
}) {
  const { t } = useTranslation('settings');
  const [name, setName] = useState('');
  const [isTried, setTried] = useState(false);
  const submit = async () => {
    setTried(true);
    if (name.trim() === '') return;
    try {
      await onAdd(name.trim());
      setName('');
      setTried(false);
    } catch {
      // Shown below.
    }
  };
  return (
    <form
      className="grid gap-2"
      onSubmit={(event) => {
        event.preventDefault();
        void submit();
      }}
    >
      <div className="flex items-end gap-4">
        <TextField
          label={label}
          className="w-[320px]"
          maxLength={200}
          value={name}
          onChange={(event) => setName(event.target.value)}
        />
        <Button type="submit" variant="quiet" disabled={isBusy}>
          {t('range.add')}
        </Button>
      </div>
      {isTried && name.trim() === '' && <p className="text-small font-medium text-madder">{t('range.nameMissing')}</p>}
      <ProblemNote error={error} />
    </form>
  );
}

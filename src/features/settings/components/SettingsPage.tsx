import { useTranslation } from 'react-i18next';
import { Link, useParams } from 'react-router-dom';
import { Page } from '../../../components/Page.tsx';
import { NoPermission } from '../../../components/states.tsx';
import { useCategoryInView, withCategory } from '../../../lib/categories.ts';
import { useMay } from '../../../lib/session.ts';
import { useTitle } from '../../../lib/use-title.ts';
import { GeneralSettings } from './GeneralSettings.tsx';
import { PeopleSettings } from './PeopleSettings.tsx';
import { RangeSettings } from './RangeSettings.tsx';

const parts = ['general', 'people', 'range'] as const;
type Part = (typeof parts)[number];

export function SettingsPage() {
  const { t } = useTranslation('settings');
  const may = useMay();
  const { category } = useCategoryInView();
  const isAdministrator = may('administer', null);
  const shown = parts.filter((part) => part !== 'people' || isAdministrator);
  const asked = useParams().part ?? 'general';
  const part: Part | null = parts.find((known) => known === asked) ?? null;
  useTitle(part ? t('tab', { part: t(`part.${part}`) }) : t('title'));
  return (
    <Page>
      <div className="grid grid-cols-[132px_minmax(0,1fr)] gap-10">
        <nav aria-label={t('parts')} className="border-r border-line">
          <p className="mb-2 font-display text-[15px]/5 font-[620] text-soft">{t('title')}</p>
          <ul>
            {shown.map((name) => (
              <li key={name}>
                <Link
                  to={withCategory(`/settings/${name}`, category?.id ?? null)}
                  aria-current={name === part ? 'page' : undefined}
                  className={`block py-1 ${
                    name === part ? '-mr-px border-r-[3px] border-ink font-[640]' : 'text-soft hover:text-ink'
                  }`}
                >
                  {t(`part.${name}`)}
                </Link>
              </li>
            ))}
          </ul>
        </nav>
        <div className="min-w-0">
          {part === 'general' && <GeneralSettings isAdministrator={isAdministrator} />}
          {part === 'people' &&
            (isAdministrator ? <PeopleSettings /> : <NoPermission isPage detail={t('adminOnly')} />)}
          {part === 'range' && <RangeSettings />}
          {part === null && <NoPermission isPage />}
        </div>
      </div>
    </Page>
  );
}

import { useQuery, useQueryClient } from '@tanstack/react-query';
import { useTranslation } from 'react-i18next';
import { Link, useLocation, useNavigate } from 'react-router-dom';
import { FairweekMark } from '../components/marks.tsx';
import { Menu, MenuChoice, MenuItem, MenuRule } from '../components/Menu.tsx';
import { showToast } from '../components/toasts.ts';
import { waitingQuery } from '../features/waiting/queries.ts';
import { describeError } from '../lib/api.ts';
import { useCategoryInView, withCategory } from '../lib/categories.ts';
import { roleIn, signOut, useSession } from '../lib/session.ts';
import { useTheme } from '../lib/theme.ts';
import { FindBox } from './FindBox.tsx';
import { placeOf, places } from './places.ts';

export function TopBar() {
  const { t } = useTranslation('shell');
  const { category } = useCategoryInView();
  return (
    <header className="flex min-h-11 shrink-0 flex-wrap items-center gap-x-5 px-6 max-[1100px]:pt-2 min-[1440px]:gap-x-7">
      <Link
        to={withCategory('/', category?.id ?? null)}
        aria-label={t('home')}
        className="flex items-center gap-[9px] font-display text-[19px]/6 font-[680] tracking-[-0.015em] [font-stretch:92%]"
      >
        <FairweekMark />
        Fairweek
      </Link>
      <CategoryChooser />
      <Places />
      <FindBox />
      <PersonMenu />
    </header>
  );
}

function CategoryChooser() {
  const { t } = useTranslation('shell');
  const { category, categories, chooseCategory } = useCategoryInView();
  const { pathname } = useLocation();
  const navigate = useNavigate();
  // A line's page belongs to one category: choosing another leads to that category's plan.
  const choose = (id: number) => {
    if (/^\/(plan|lines)\/./.test(pathname)) void navigate(withCategory('/plan', id));
    else if (/^\/sales\/imports\//.test(pathname)) void navigate(withCategory('/sales', id));
    else chooseCategory(id);
  };
  return (
    <div className="flex h-5 items-center border-l border-line pl-5 whitespace-nowrap">
      {category === null ? (
        <span className="text-soft">{t('noCategory')}</span>
      ) : (
        <Menu trigger={category.name} label={t('category', { name: category.name })}>
          <MenuChoice
            value={String(category.id)}
            onChange={(value) => choose(Number(value))}
            options={categories.map(({ id, name }) => ({ value: String(id), label: name }))}
          />
        </Menu>
      )}
    </div>
  );
}

function Places() {
  const { t } = useTranslation('shell');
  const { category } = useCategoryInView();
  const current = placeOf(useLocation().pathname);
  const waiting = useQuery(waitingQuery).data?.entries.length ?? 0;
  return (
    <nav
      aria-label={t('places')}
      className="ml-2 h-11 max-[1100px]:order-last max-[1100px]:ml-0 max-[1100px]:basis-full"
    >
      <ul className="flex h-11 gap-[18px] min-[1440px]:gap-6">
        {places.map(({ name, path }) => (
          <li key={name}>
            <Link
              to={withCategory(path, category?.id ?? null)}
              aria-current={name === current ? 'page' : undefined}
              className={`relative flex h-11 items-center gap-1.5 whitespace-nowrap hover:text-ink ${
                name === current
                  ? "font-[640] text-ink after:absolute after:bottom-[-1px] after:left-1/2 after:-ml-[7px] after:h-[7px] after:w-[14px] after:bg-ink after:content-[''] after:[clip-path:polygon(0_100%,50%_0,100%_100%)]"
                  : 'text-soft'
              }`}
            >
              {t(`place.${name}`)}
              {name === 'waiting' && waiting > 0 && (
                <span className="min-w-[18px] rounded-full border border-rule px-1 text-center text-tiny font-semibold text-ink">
                  <span aria-hidden="true">{waiting}</span>
                  <span className="sr-only">{t('entriesWait', { count: waiting })}</span>
                </span>
              )}
            </Link>
          </li>
        ))}
      </ul>
    </nav>
  );
}

function PersonMenu() {
  const { t } = useTranslation('shell');
  const { person } = useSession();
  const { category } = useCategoryInView();
  const { theme, switchTheme } = useTheme();
  const navigate = useNavigate();
  const client = useQueryClient();
  const role = roleIn(person.assignments, category?.id ?? null);
  const leave = async () => {
    try {
      await signOut();
      await navigate('/sign-in');
      client.clear();
    } catch (error) {
      showToast({ tone: 'problem', text: describeError(error).detail });
    }
  };
  return (
    <Menu
      align="end"
      label={t('person.menu', { name: person.name })}
      trigger={
        <span className="text-soft">
          <span className="font-[560] text-ink">{person.name}</span>
          {role !== null && `, ${t(`common:role.${role}`)}`}
        </span>
      }
    >
      <MenuItem onSelect={() => void navigate(withCategory('/settings', category?.id ?? null))}>
        {t('person.settings')}
      </MenuItem>
      <MenuItem onSelect={switchTheme}>{t(theme === 'dark' ? 'person.light' : 'person.dark')}</MenuItem>
      <MenuRule />
      <MenuItem onSelect={() => void leave()}>{t('person.signOut')}</MenuItem>
    </Menu>
  );
}

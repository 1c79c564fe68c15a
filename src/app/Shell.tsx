import { useQuery } from '@tanstack/react-query';
import { Suspense, useEffect, useRef } from 'react';
import { useTranslation } from 'react-i18next';
import { Outlet, useLocation } from 'react-router-dom';
import { Page } from '../components/Page.tsx';
import { ErrorState, LoadingState } from '../components/states.tsx';
import { ProblemError } from '../lib/api.ts';
import { categoriesQuery } from '../lib/categories.ts';
import { sessionQuery } from '../lib/session.ts';
import { Start } from './Start.tsx';
import { TopBar } from './TopBar.tsx';

/** Waits for the person and the categories, then shows the top bar and the page. */
export function Shell() {
  const session = useQuery(sessionQuery);
  const categories = useQuery({ ...categoriesQuery, enabled: session.data !== undefined });
  const problem = session.error ?? categories.error;
  if (problem instanceof ProblemError && problem.type === 'not-signed-in') return <Start />;
  if (problem && (session.data === undefined || categories.data === undefined)) {
    return (
      <main className="px-6 pt-10">
        <ErrorState
          isPage
          error={problem}
          onRetry={() => void (session.error ? session.refetch() : categories.refetch())}
        />
      </main>
    );
  }
  if (session.data === undefined || categories.data === undefined) return <Start />;
  return <Frame />;
}

function Frame() {
  const { t } = useTranslation('shell');
  const { pathname } = useLocation();
  const shown = useRef(pathname);
  useEffect(() => {
    if (shown.current === pathname) return;
    shown.current = pathname;
    window.scrollTo(0, 0);
    document.getElementById('main')?.focus({ preventScroll: true });
  }, [pathname]);
  return (
    <div className="flex min-h-dvh flex-col">
      <a
        href="#main"
        className="sr-only focus:not-sr-only focus:absolute focus:top-2 focus:left-2 focus:z-50 focus:bg-sheet focus:px-3 focus:py-1"
      >
        {t('skip')}
      </a>
      <TopBar />
      <Suspense
        fallback={
          <Page>
            <LoadingState />
          </Page>
        }
      >
        <Outlet />
      </Suspense>
    </div>
  );
}

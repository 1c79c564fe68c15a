import type { UseQueryResult } from '@tanstack/react-query';
import type { ReactNode } from 'react';
import { useTranslation } from 'react-i18next';
import { describeError, ProblemError } from '../lib/api.ts';
import { Button } from './Button.tsx';

/** A state that fills the page is its heading; within a page it is a line of display type. */
function StateTitle({
  isPage,
  className = '',
  children,
}: {
  isPage: boolean;
  className?: string;
  children: ReactNode;
}) {
  return isPage ? (
    <h1 className={className}>{children}</h1>
  ) : (
    <p className={`font-display text-[15px]/5 font-[620] [font-stretch:92%] ${className}`}>{children}</p>
  );
}

/** Nothing here yet: says why and what to do. */
export function EmptyState({
  title,
  children,
  action,
  isPage = false,
}: {
  title: string;
  children?: ReactNode;
  action?: ReactNode;
  isPage?: boolean;
}) {
  return (
    <div className="max-w-[560px] border-l-2 border-line py-2 pl-5">
      <StateTitle isPage={isPage}>{title}</StateTitle>
      {children && <div className="mt-1 text-soft">{children}</div>}
      {action && <div className="mt-3">{action}</div>}
    </div>
  );
}

/** Weeks filling up; the words are read aloud. */
export function LoadingState({ label }: { label?: string }) {
  const { t } = useTranslation('common');
  return (
    <div role="status" className="flex items-center gap-3 py-6 text-soft">
      <svg width="44" height="16" viewBox="0 0 44 16" aria-hidden="true">
        {[7, 10, 6, 12, 9].map((height, index) => (
          <rect
            key={index}
            className="animate-pulse"
            x={index * 9}
            y={15 - height}
            width="7"
            height={height}
            fill="var(--sold-far)"
            style={{ animationDelay: `${index * 120}ms` }}
          />
        ))}
        <path d="M0 15.5H44" stroke="var(--rule)" />
      </svg>
      {label ?? t('loading')}
    </div>
  );
}

export function ErrorState({
  error,
  onRetry,
  isPage = false,
}: {
  error: unknown;
  onRetry?: () => void;
  isPage?: boolean;
}) {
  const { t } = useTranslation('common');
  const { title, detail } = describeError(error);
  const instance = error instanceof ProblemError ? error.instance : null;
  return (
    <div role="alert" className="max-w-[620px] border-l-2 border-madder py-2 pl-5">
      <StateTitle isPage={isPage} className="text-madder">
        {title}
      </StateTitle>
      <p className="mt-1">{detail}</p>
      {instance && <p className="mt-1 text-small text-soft">{t('requestNumber', { instance })}</p>}
      {onRetry && (
        <div className="mt-3">
          <Button variant="quiet" onClick={onRetry}>
            {t('tryAgain')}
          </Button>
        </div>
      )}
    </div>
  );
}

export function NoPermission({ detail, isPage = false }: { detail?: string; isPage?: boolean }) {
  const { t } = useTranslation('common');
  return (
    <div role="alert" className="max-w-[560px] border-l-2 border-rule py-2 pl-5">
      <StateTitle isPage={isPage}>{t('noPermission.title')}</StateTitle>
      <p className="mt-1 text-soft">{detail ?? t('noPermission.detail')}</p>
    </div>
  );
}

/** Loading, no permission, error, or the answer. An answer once shown stays while it is asked for again. */
export function QueryStates<Value>({
  query,
  children,
  loading,
  isPage = false,
}: {
  query: Pick<UseQueryResult<Value>, 'data' | 'error' | 'refetch'>;
  children: (value: Value) => ReactNode;
  loading?: string;
  /** The answer is the page itself, heading and all. */
  isPage?: boolean;
}) {
  if (query.data !== undefined) return children(query.data);
  if (query.error) {
    if (query.error instanceof ProblemError && query.error.status === 403) {
      return <NoPermission detail={query.error.detail} isPage={isPage} />;
    }
    return <ErrorState error={query.error} onRetry={() => void query.refetch()} isPage={isPage} />;
  }
  return <LoadingState label={loading} />;
}

/** What went wrong with something the person just did, beside the button. */
export function ProblemNote({ error }: { error: unknown }) {
  if (!error) return null;
  const { title, detail } = describeError(error);
  const errors = error instanceof ProblemError ? error.errors.slice(0, 5) : [];
  return (
    <div role="alert" className="border-l-2 border-madder py-1 pl-3 text-madder">
      <p>
        <b>{title}.</b> {detail}
      </p>
      {errors.length > 0 && (
        <ul>
          {errors.map((entry, index) => (
            <li key={index}>{entry.detail}</li>
          ))}
        </ul>
      )}
    </div>
  );
}

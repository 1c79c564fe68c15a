import type { ReactNode } from 'react';
import { useTranslation } from 'react-i18next';

type LineState = 'draft' | 'submitted' | 'locked';
const order: LineState[] = ['draft', 'submitted', 'locked'];

function Tablet({ state, colour }: { state: LineState; colour: string }) {
  if (state === 'draft') {
    return <rect x="2.7" y=".7" width="8.6" height="6.6" fill="none" stroke={colour} strokeWidth="1.4" />;
  }
  return (
    <>
      <rect x="2" y="0" width="10" height="8" fill={colour} />
      {state === 'locked' && <rect x="0" y="9.5" width="14" height="3" fill={colour} />}
    </>
  );
}

/** draft: an open tablet; submitted: a filled one; locked: a filled one on its foot. The word stands beside it. */
export function StateMark({ state }: { state: LineState }) {
  return (
    <svg
      className="mr-1.5 inline-block shrink-0 align-[-2px]"
      width="14"
      height="13"
      viewBox="0 0 14 13"
      aria-hidden="true"
    >
      <g transform={state === 'locked' ? undefined : 'translate(0 2.5)'}>
        <Tablet state={state} colour="var(--ink)" />
      </g>
    </svg>
  );
}

/** The way of a line through a round: solid where passed, dotted where to come; `action` stands on the next stretch. */
export function StateRoute({ state, action }: { state: LineState; action?: ReactNode }) {
  const { t } = useTranslation('common');
  const reached = order.indexOf(state);
  return (
    <ol className="relative flex items-start" aria-label={t('state.route')}>
      {order.map((step, index) => (
        <li key={step} className="flex items-start" aria-current={step === state ? 'step' : undefined}>
          {index > 0 && (
            <span className="flex h-8 items-center" aria-hidden={index !== reached + 1 || undefined}>
              <Stretch isPassed={index <= reached} />
              {index === reached + 1 && action}
              {index === reached + 1 && action !== undefined && <Stretch isPassed={false} />}
            </span>
          )}
          <span className="flex w-[58px] flex-col items-center">
            <svg className="my-[9px]" width="14" height="14" viewBox="0 0 14 14" aria-hidden="true">
              <g transform="translate(0 1)">
                <Tablet state={step} colour={index <= reached ? 'var(--ink)' : 'var(--rule)'} />
              </g>
            </svg>
            <span className={`text-small ${step === state ? 'font-[640] text-ink' : 'text-soft'}`}>
              {t(`state.${step}`)}
            </span>
          </span>
        </li>
      ))}
    </ol>
  );
}

function Stretch({ isPassed }: { isPassed: boolean }) {
  return (
    <svg className="-mx-3" width="64" height="2" aria-hidden="true">
      <path
        d="M0 1H64"
        stroke={isPassed ? 'var(--ink)' : 'var(--rule)'}
        strokeWidth="2"
        strokeDasharray={isPassed ? undefined : '2 4'}
      />
    </svg>
  );
}

import type { ReactNode } from 'react';
import { useTranslation } from 'react-i18next';
import { RouteSteps } from './RouteSteps.tsx';

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

/** The way of a line through a round; `action` stands on the next stretch. */
export function StateRoute({ state, action }: { state: LineState; action?: ReactNode }) {
  const { t } = useTranslation('common');
  return (
    <RouteSteps
      label={t('state.route')}
      reached={order.indexOf(state)}
      action={action}
      steps={order.map((step) => ({
        name: step,
        label: t(`state.${step}`),
        mark: (colour) => (
          <g transform="translate(0 3)">
            <Tablet state={step} colour={colour} />
          </g>
        ),
      }))}
    />
  );
}

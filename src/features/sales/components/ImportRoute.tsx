import { useTranslation } from 'react-i18next';
import type { ImportState } from '../../../../shared/contracts/sales.ts';
import { RouteSteps } from '../../../components/RouteSteps.tsx';

const reached: Record<ImportState, number> = {
  reading: 0,
  'to-check': 1,
  accepting: 1,
  accepted: 2,
  withdrawing: 2,
  withdrawn: 2,
  refused: 0,
  discarded: 2,
};

/** Read → checked → in force, or out again: crossed. */
export function ImportRoute({ state }: { state: ImportState }) {
  const { t } = useTranslation('sales');
  const at = reached[state];
  const isOut = state === 'withdrawn' || state === 'discarded';
  const labels = [
    t(state === 'reading' ? 'state.reading' : state === 'refused' ? 'state.refused' : 'page.route.read'),
    t(state === 'to-check' ? 'page.route.yours' : state === 'accepting' ? 'state.accepting' : 'page.route.check'),
    t(isOut || state === 'withdrawing' ? `state.${state}` : 'page.route.held'),
  ];
  return (
    <RouteSteps
      label={t('page.routeLabel')}
      reached={at}
      stretch={130}
      steps={labels.map((label, index) => ({
        name: String(index),
        label,
        mark: (colour) =>
          index <= at && !(isOut && index === 2) ? (
            <rect x="1" y="3" width="12" height="8" fill={colour} />
          ) : (
            <>
              <rect x="1.7" y="3.7" width="10.6" height="6.6" fill="none" stroke={colour} strokeWidth="1.4" />
              {isOut && index === 2 && <path d="M0 7H14" stroke={colour} strokeWidth="1.4" />}
            </>
          ),
      }))}
    />
  );
}

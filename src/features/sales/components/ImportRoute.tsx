import { useTranslation } from 'react-i18next';
import type { ImportState } from '../../../../shared/contracts/sales.ts';
import { RouteSteps } from '../../../components/RouteSteps.tsx';

const reached: Record<ImportState, number> = {
  reading: 0,
  'to-check': 1,
  accepting: 1,
  accepted: 2,
  withdrawing: 2,
  withdrawn: 1,
  refused: 0,
  discarded: 1,
};

/** Read → checked → in force. */
export function ImportRoute({ state }: { state: ImportState }) {
  const { t } = useTranslation('sales');
  const at = reached[state];
  return (
    <RouteSteps
      label={t('page.routeLabel')}
      reached={at}
      stretch={130}
      steps={(['read', 'check', 'held'] as const).map((step, index) => ({
        name: step,
        label: t(`page.route.${step}`),
        mark: (colour) =>
          index <= at ? (
            <rect x="1" y="3" width="12" height="8" fill={colour} />
          ) : (
            <rect x="1.7" y="3.7" width="10.6" height="6.6" fill="none" stroke={colour} strokeWidth="1.4" />
          ),
      }))}
    />
  );
}

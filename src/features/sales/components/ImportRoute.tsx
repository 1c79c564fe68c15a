import { useTranslation } from 'react-i18next';
import type { ImportState } from '../../../../shared/contracts/sales.ts';

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

/** Read → checked → in force: solid where passed, dotted where to come. */
export function ImportRoute({ state }: { state: ImportState }) {
  const { t } = useTranslation('sales');
  const at = reached[state];
  return (
    <ol className="flex" aria-label={t('page.routeLabel')}>
      {(['read', 'check', 'held'] as const).map((step, index) => (
        <li
          key={step}
          className="relative flex w-[132px] flex-col items-center first:w-[90px] last:w-[90px]"
          aria-current={index === at ? 'step' : undefined}
        >
          <svg className="my-2" width="12" height="8" viewBox="0 0 12 8" aria-hidden="true">
            {index <= at ? (
              <rect width="12" height="8" fill="var(--ink)" />
            ) : (
              <rect x=".7" y=".7" width="10.6" height="6.6" fill="none" stroke="var(--rule)" strokeWidth="1.4" />
            )}
          </svg>
          {index > 0 && (
            <svg
              className={`absolute top-[11px] h-[2px] ${index === 1 ? 'right-[78px] w-[94px]' : 'right-[57px] w-[94px]'}`}
              preserveAspectRatio="none"
              viewBox="0 0 94 2"
              aria-hidden="true"
            >
              <path
                d="M0 1H94"
                stroke={index <= at ? 'var(--ink)' : 'var(--rule)'}
                strokeWidth="2"
                strokeDasharray={index <= at ? undefined : '2 4'}
              />
            </svg>
          )}
          <span className={`text-small ${index === at ? 'font-[640]' : 'text-soft'}`}>{t(`page.route.${step}`)}</span>
        </li>
      ))}
    </ol>
  );
}

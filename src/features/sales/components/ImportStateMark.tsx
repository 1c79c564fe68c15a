import { useTranslation } from 'react-i18next';
import type { ImportState } from '../../../../shared/contracts/sales.ts';

const shapes: Record<ImportState, 'open' | 'half' | 'full' | 'crossed' | 'broken'> = {
  reading: 'half',
  'to-check': 'open',
  accepting: 'half',
  accepted: 'full',
  withdrawing: 'half',
  withdrawn: 'crossed',
  refused: 'broken',
  discarded: 'crossed',
};

/** Open: waits; half: work goes on; full: in force; crossed: out again; broken: unreadable. The word stands beside it. */
export function ImportStateMark({ state }: { state: ImportState }) {
  const { t } = useTranslation('sales');
  const shape = shapes[state];
  const colour = shape === 'broken' ? 'var(--madder)' : shape === 'crossed' ? 'var(--rule)' : 'var(--ink)';
  return (
    <span
      className={`whitespace-nowrap ${shape === 'broken' ? 'text-madder' : shape === 'crossed' ? 'text-soft' : ''}`}
    >
      <svg className="mr-1.5 inline-block align-[-1px]" width="12" height="10" viewBox="0 0 12 10" aria-hidden="true">
        <rect
          x="1"
          y="1"
          width="10"
          height="8"
          fill={shape === 'full' ? colour : 'none'}
          stroke={colour}
          strokeWidth="1.4"
          strokeDasharray={shape === 'broken' ? '3 2' : undefined}
        />
        {shape === 'half' && <rect x="1" y="1" width="5" height="8" fill={colour} />}
        {shape === 'crossed' && <path d="M0 5H12" stroke={colour} strokeWidth="1.4" />}
      </svg>
      {t(`state.${state}`)}
    </span>
  );
}

import { useTranslation } from 'react-i18next';
import { formatPercent } from '../../../lib/format.ts';
import type { EffectShare } from '../effects.ts';

const width = 96;

/** How much the items say themselves (filled) and how much the line lends them (outlined), in words below. */
export function EvidenceBar({ share }: { share: EffectShare | null }) {
  const { t } = useTranslation('lines');
  if (!share) return <span className="text-small text-soft">{t('evidence.shared')}</span>;
  const own = Math.round(share.own * width);
  return (
    <>
      <svg width={width} height="9" className="block" aria-hidden="true">
        <rect x=".5" y=".5" width={width - 1} height="8" fill="none" stroke="var(--rule)" />
        <rect width={own} height="9" fill="var(--sky)" />
      </svg>
      <span className="mt-0.5 block text-tiny">
        {t(`evidence.${share.level}`, { own: formatPercent(share.own, 0) })}
        <span className="block text-soft">{t('evidence.line', { rest: formatPercent(1 - share.own, 0) })}</span>
      </span>
    </>
  );
}

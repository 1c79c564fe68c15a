import { useTranslation } from 'react-i18next';
import { BeyondMark, FootMark, ForkMark, LozengeMark, PennantMark, RingMark } from '../../../components/marks.tsx';

/** What each mark means. */
export function GridKey({ note, hasPending = false }: { note: string | null; hasPending?: boolean }) {
  const { t } = useTranslation('plan');
  return (
    <div className="flex min-h-[34px] flex-wrap items-center gap-x-4 gap-y-0.5 text-tiny text-soft">
      <ul aria-label={t('key.label')} className="contents">
        <li className="inline-flex items-center gap-1.5">
          <b className="text-small text-sky">1,240</b> {t('key.model')}
        </li>
        <li className="inline-flex items-center gap-1.5">
          <b className="over text-small">1,240</b> {t('key.override')}
        </li>
        <li className="inline-flex items-center gap-1.5">
          <span className="over-through text-small">1,240</span> {t('key.through')}
        </li>
        {hasPending && (
          <li className="inline-flex items-center gap-1.5">
            <svg width="7" height="7" viewBox="0 0 7 7" aria-hidden="true">
              <path d="M0 0H7L0 7Z" fill="var(--plum)" />
            </svg>
            {t('key.pending')}
          </li>
        )}
        <li className="inline-flex items-center gap-1.5">
          <RingMark /> {t('key.look')}
        </li>
        <li className="inline-flex items-center gap-1.5">
          <span className="plan-decision text-tiny">!</span> {t('key.decision')}
        </li>
        <li className="inline-flex items-center gap-1.5">
          <FootMark /> {t('key.locked')}
        </li>
        <li className="inline-flex items-center gap-1.5">
          <LozengeMark /> {t('key.holiday')}
        </li>
        <li className="inline-flex items-center gap-1.5">
          <PennantMark /> {t('key.promotion')}
        </li>
        <li className="inline-flex items-center gap-1.5">
          <b className="gap-figure text-small">412</b> {t('key.gap')}
        </li>
        <li className="inline-flex items-center gap-1.5">
          <ForkMark /> {t('key.outside')}
        </li>
        <li className="inline-flex items-center gap-1.5">
          <BeyondMark /> {t('key.beyond')}
        </li>
      </ul>
      {note && <span className="ml-auto">{note}</span>}
    </div>
  );
}

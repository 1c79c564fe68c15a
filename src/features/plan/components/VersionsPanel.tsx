import { useQuery } from '@tanstack/react-query';
import { useTranslation } from 'react-i18next';
import { Button } from '../../../components/Button.tsx';
import { CloseButton } from '../../../components/CloseButton.tsx';
import { FootMark } from '../../../components/marks.tsx';
import { QueryStates } from '../../../components/states.tsx';
import { formatInstant, formatNumber, formatSigned } from '../../../lib/format.ts';
import { versionsQuery } from '../queries.ts';

/** Every version of the line, newest first: who, when, what, why and how much. One can be opened for reading. */
export function VersionsPanel({
  lineId,
  shown,
  onOpen,
  onClose,
}: {
  lineId: number;
  /** Number of the version on screen; null = the newest. */
  shown: number | null;
  onOpen: (number: number | null) => void;
  onClose: () => void;
}) {
  const { t } = useTranslation('plan');
  const { t: common } = useTranslation('common');
  const query = useQuery(versionsQuery(lineId));
  return (
    <aside aria-label={t('versions.title')} className="plan-drawer">
      <div className="flex items-start justify-between">
        <h2 className="text-[20px]/6">{t('versions.title')}</h2>
        <CloseButton label={common('close')} onClick={onClose} />
      </div>
      <p className="mt-0.5 text-small text-soft">{t('versions.lead')}</p>
      <QueryStates query={query}>
        {({ versions }) => {
          const ordered = versions.toSorted((a, b) => b.number - a.number);
          const newest = ordered[0]?.number ?? null;
          return (
            <ol className="mt-2">
              {ordered.map((version) => {
                const isShown = (shown ?? newest) === version.number;
                return (
                  <li
                    key={version.number}
                    aria-current={isShown || undefined}
                    className={`-mx-2 grid grid-cols-[30px_1fr_auto] gap-x-2 border-t border-line px-2 py-1.5 text-small ${
                      isShown ? 'bg-moss-tint' : ''
                    }`}
                  >
                    <b className="num pr-1">{version.number}</b>
                    <span>
                      <b>{version.author}</b> <span className="text-soft">{t(`versions.kind.${version.kind}`)}</span>
                      {version.isLockedVersion && (
                        <>
                          {' '}
                          <FootMark label={t('versions.locked')} />
                        </>
                      )}
                      {(version.reason ?? version.note) && (
                        <span className="block text-soft italic">
                          {[version.reason, version.note].filter(Boolean).join(': ')}
                        </span>
                      )}
                      <span className="block">
                        {t('versions.size', {
                          count: version.changedCells,
                          cells: formatNumber(version.changedCells),
                          units: formatSigned(version.changedUnits),
                        })}
                      </span>
                    </span>
                    <span className="num flex flex-col items-end text-soft">
                      {formatInstant(version.at)}
                      {isShown ? (
                        <span className="text-ink">{t('versions.shown')}</span>
                      ) : (
                        <Button
                          variant="text"
                          className="!py-0 !text-small"
                          aria-label={t('versions.openNumber', { number: version.number })}
                          onClick={() => onOpen(version.number === newest ? null : version.number)}
                        >
                          {t('versions.open')}
                        </Button>
                      )}
                    </span>
                  </li>
                );
              })}
            </ol>
          );
        }}
      </QueryStates>
    </aside>
  );
}

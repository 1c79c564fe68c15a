import type { TFunction } from 'i18next';
import { useTranslation } from 'react-i18next';
import type { Finding } from '../../../../shared/contracts/lines.ts';
import { isIsoDate, weekLabel } from '../../../../shared/domain/weeks.ts';

/** Findings that change how far a number can be trusted stand first; the rest is detail of the data. */
const weighty = new Set(['line-too-thin', 'series-too-thin', 'series-intermittent', 'ranges-not-scaled']);

function describeFinding(t: TFunction<'plan'>, finding: Finding, itemNames: ReadonlyMap<string, string>): string {
  const item = finding.item === undefined ? undefined : (itemNames.get(finding.item) ?? finding.item);
  const place = [item, finding.location].filter(Boolean).join(', ');
  const week = finding.values?.week;
  const words = t(`finding.${finding.kind}`, {
    ...finding.values,
    ...(typeof week === 'string' && isIsoDate(week) ? { week: weekLabel(week) } : {}),
    defaultValue: t('finding.other', { kind: finding.kind.replaceAll('-', ' ') }),
  });
  return place === '' ? words : `${place}: ${words}`;
}

const noNames: ReadonlyMap<string, string> = new Map();

/** What the forecast of a line has to say about itself. */
export function FindingsNote({
  findings,
  itemNames = noNames,
}: {
  findings: readonly Finding[];
  /** Names by code. */
  itemNames?: ReadonlyMap<string, string>;
}) {
  const { t } = useTranslation('plan');
  if (findings.length === 0) return null;
  const first = findings.filter(({ kind }) => weighty.has(kind));
  const rest = findings.filter(({ kind }) => !weighty.has(kind));
  const byKind = new Map<string, Finding[]>();
  for (const finding of rest) byKind.set(finding.kind, [...(byKind.get(finding.kind) ?? []), finding]);
  return (
    <div className="text-small">
      {first.slice(0, 3).map((finding, index) => (
        <p key={index} className="border-l-2 border-turmeric pl-3">
          <b className="text-turmeric">{t('finding.caution')}</b> {describeFinding(t, finding, itemNames)}
        </p>
      ))}
      {findings.length > Math.min(3, first.length) && (
        <details className="mt-1">
          <summary className="cursor-pointer text-soft">{t('finding.all', { count: findings.length })}</summary>
          <ul className="mt-1 max-h-40 overflow-y-auto pl-4">
            {first.slice(3, 20).map((finding, index) => (
              <li key={index}>{describeFinding(t, finding, itemNames)}</li>
            ))}
            {[...byKind.values()].map((same) => (
              <li key={same[0]?.kind}>
                {same
                  .slice(0, 2)
                  .map((finding) => describeFinding(t, finding, itemNames))
                  .join(' · ')}
                {same.length > 2 && ` · ${t('finding.more', { count: same.length - 2 })}`}
              </li>
            ))}
          </ul>
        </details>
      )}
    </div>
  );
}

import { useTranslation } from 'react-i18next';
import i18next from 'i18next';
import type { Finding, LineFitView } from '../../../../shared/contracts/lines.ts';
import { Section } from '../../../components/Page.tsx';
import { formatUnits } from '../../../lib/format.ts';
import { type FindingGroup, groupFindings } from '../findings.ts';

const few = 3;
const many = 40;

export function FindingList({ findings, names }: { findings: Finding[]; names: LineFitView['names'] }) {
  const { t } = useTranslation('lines');
  const groups = groupFindings(findings, names);
  return (
    <Section title={t('findings.title')}>
      {groups.length === 0 ? (
        <p className="text-soft">{t('findings.none')}</p>
      ) : (
        <ul>
          {groups.map((group, index) => (
            <li key={index} className="border-b border-line py-1.5">
              <Group group={group} />
            </li>
          ))}
        </ul>
      )}
    </Section>
  );
}

function Group({ group }: { group: FindingGroup }) {
  const { t } = useTranslation('lines');
  const key = `findings.kind.${group.kind}`;
  const sentence = i18next.exists(key, { ns: 'lines' })
    ? t(key, group.values)
    : t('findings.kind.other', { kind: group.kind.replaceAll('-', ' ') });
  if (group.places.length <= few) {
    return (
      <>
        {sentence}.{group.places.length > 0 && <span className="text-soft"> {group.places.join('; ')}</span>}
      </>
    );
  }
  return (
    <details>
      <summary className="cursor-pointer">
        {sentence}. <span className="text-soft">{t('findings.times', { count: group.places.length })}</span>
      </summary>
      <p className="mt-1 text-small text-soft">
        {group.places.slice(0, many).join('; ')}
        {group.places.length > many && `; +${formatUnits(group.places.length - many)}`}
      </p>
    </details>
  );
}

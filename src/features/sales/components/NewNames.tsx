import { useTranslation } from 'react-i18next';
import type { ImportDetail } from '../../../../shared/contracts/sales.ts';
import { Checkbox } from '../../../components/fields.tsx';
import { Section } from '../../../components/Page.tsx';
import { formatUnits } from '../../../lib/format.ts';

const most = 12;

/** Names that the file brings and Fairweek doesn't know yet; made only after a yes. */
export function NewNames({
  unknown,
  isYes,
  onYes,
}: {
  unknown: NonNullable<ImportDetail['unknown']>;
  isYes: boolean;
  onYes: (isYes: boolean) => void;
}) {
  const { t } = useTranslation('sales');
  const groups = [
    { key: 'categories', names: unknown.categories },
    { key: 'lines', names: unknown.lines.map(({ category, line }) => `${line} (${category})`) },
    {
      key: 'items',
      names: unknown.items.map(({ item, name }) => (name && name !== item ? `${name} (${item})` : item)),
    },
    { key: 'locations', names: unknown.locations },
  ].filter(({ names }) => names.length > 0);
  return (
    <Section title={t('unknown.title')}>
      <p className="mb-2 text-soft">{t('unknown.lead')}</p>
      <dl>
        {groups.map(({ key, names }) => (
          <div key={key} className="grid grid-cols-[110px_1fr] gap-4 border-b border-line py-1.5">
            <dt className="text-soft">
              {t(`unknown.${key}`)} <b className="text-ink">{formatUnits(names.length)}</b>
            </dt>
            <dd>
              {names.slice(0, most).join(', ')}
              {names.length > most && ` ${t('unknown.more', { n: formatUnits(names.length - most) })}`}
            </dd>
          </div>
        ))}
      </dl>
      <Checkbox
        className="mt-3"
        label={<b>{t('unknown.yes')}</b>}
        checked={isYes}
        onChange={(event) => onYes(event.target.checked)}
      />
    </Section>
  );
}

import { useTranslation } from 'react-i18next';
import type { WaitingEntry } from '../../../../shared/contracts/waiting.ts';
import { ActLink } from '../../../components/Button.tsx';
import { ArrowMark } from '../../../components/marks.tsx';
import { EmptyState } from '../../../components/states.tsx';
import { withCategory } from '../../../lib/categories.ts';
import { formatInstant, formatMoney } from '../../../lib/format.ts';
import { useCurrency } from '../../../lib/settings.ts';
import { wordDetail } from '../wording.ts';

export function WaitingEntries({ entries }: { entries: WaitingEntry[] }) {
  const { t } = useTranslation('waiting');
  if (entries.length === 0) return <EmptyState title={t('emptyTitle')}>{t('empty')}</EmptyState>;
  return (
    <table className="w-full border-collapse">
      <caption className="sr-only">{t('tableCaption')}</caption>
      <thead>
        <tr className="border-b border-rule text-left text-tiny text-soft">
          <th scope="col" colSpan={2} className="pb-1 font-normal">
            {t('count', { count: entries.length })}
          </th>
          <th scope="col" className="num pb-1 font-normal">
            {t('stake')}
          </th>
          <th scope="col" className="pb-1 pl-6 font-normal">
            {t('since')}
          </th>
          <th scope="col" className="pb-1 font-normal">
            <span className="sr-only">{t('go')}</span>
          </th>
        </tr>
      </thead>
      <tbody>
        {entries.map((entry, index) => (
          <Row key={`${index}-${entry.kind}-${entry.link}`} entry={entry} position={index + 1} />
        ))}
      </tbody>
    </table>
  );
}

function Row({ entry, position }: { entry: WaitingEntry; position: number }) {
  const { t } = useTranslation('waiting');
  const currency = useCurrency();
  const names = {
    subject: entry.subject,
    category: entry.categoryName ?? '',
    count: entry.count,
    detail: entry.detail ?? '',
  };
  const detail = wordDetail(entry);
  const place = entry.categoryName !== null && entry.categoryName !== entry.subject ? entry.categoryName : null;
  const [day, clock] = entry.at === null ? [null, null] : splitInstant(formatInstant(entry.at));
  return (
    <tr className="border-b border-line align-top">
      <td className="w-10 py-3 font-display text-[24px]/6 font-[560] [font-stretch:85%]">{position}</td>
      <th scope="row" className="py-3 text-left font-normal">
        <span className="block text-lead font-semibold">{t(`entry.${entry.kind}.title`, names)}</span>
        <span className="mt-0.5 block max-w-[460px] text-body/[18px] text-soft">
          {place !== null && `${place}. `}
          {detail !== null && <span className={detail.isQuoted ? 'italic' : ''}>{t(detail.key, detail.values)}</span>}
        </span>
      </th>
      <td className="num w-[104px] py-3">
        {entry.stake !== null && (
          <>
            <span className="block text-lead font-semibold">{formatMoney(entry.stake, currency, 0)}</span>
            <span className="block text-small text-soft">{t('unitsAtStake')}</span>
          </>
        )}
      </td>
      <td className="w-24 py-3 pl-6 whitespace-nowrap">
        {day}
        <span className="block text-small text-soft">{clock}</span>
      </td>
      <td className="w-[150px] py-3 text-right whitespace-nowrap">
        <ActLink
          to={withCategory(entry.link, entry.categoryId)}
          className="inline-flex items-center gap-[7px]"
          aria-label={`${t(`entry.${entry.kind}.go`)}: ${t(`entry.${entry.kind}.title`, names)}`}
        >
          {t(`entry.${entry.kind}.go`)}
          <ArrowMark />
        </ActLink>
      </td>
    </tr>
  );
}

function splitInstant(text: string): [string, string] {
  const match = /^(.*) (\d{2}:\d{2})$/.exec(text);
  return match ? [match[1] ?? '', match[2] ?? ''] : [text, ''];
}

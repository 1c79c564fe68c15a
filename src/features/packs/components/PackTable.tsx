import { useTranslation } from 'react-i18next';
import type { Pack } from '../../../../shared/contracts/packs.ts';
import { Table } from '../../../components/Table.tsx';
import { showToast } from '../../../components/toasts.ts';
import { apiPath } from '../../../lib/api.ts';
import { formatBytes, formatInstant, formatMoney, formatUnits, formatWeekSpan } from '../../../lib/format.ts';
import { useCurrency } from '../../../lib/settings.ts';

/** `9c41 e07b a2d8 513f` of a checksum: enough to compare by eye. */
export function shortChecksum(sha256: string): string {
  return (sha256.slice(0, 16).match(/.{1,4}/g) ?? []).join(' ');
}

export function PackTable({
  packs,
  categoryName,
  mayDownload,
}: {
  packs: Pack[];
  categoryName: string;
  mayDownload: boolean;
}) {
  const { t } = useTranslation('packs');
  const currency = useCurrency();
  const copy = async (sha256: string) => {
    await navigator.clipboard.writeText(sha256);
    showToast({ tone: 'done', text: t('list.copied') });
  };
  return (
    <Table caption={t('list.caption', { category: categoryName })} className="[&_tbody>tr>*]:align-top">
      <thead>
        <tr>
          <th scope="col">{t('list.number')}</th>
          <th scope="col">{t('list.weeks')}</th>
          <th scope="col">{t('list.versions')}</th>
          <th scope="col" className="num">
            {t('list.units')}
          </th>
          <th scope="col">{t('list.built')}</th>
          <th scope="col">{t('list.checksum')}</th>
          <th scope="col">
            <span className="sr-only">{t('list.file')}</span>
          </th>
        </tr>
      </thead>
      <tbody>
        {packs.map((pack, index) => (
          <tr key={pack.id} className={index === 0 ? 'bg-sheet shadow-[inset_3px_0_0_var(--moss)]' : ''}>
            <th scope="row" className="pl-3! font-display text-[17px]/5! font-[620]!">
              {pack.number}
            </th>
            <td className="whitespace-nowrap">
              {formatWeekSpan(pack.firstWeek, pack.lastWeek, t('common:to'))}
              <span className="block text-small text-soft">{t('list.lines', { count: pack.lines.length })}</span>
            </td>
            <td className="text-small">
              {pack.lines
                .map((line) => `${line.name} ${line.version}${line.isLocked ? '' : ` (${t('list.draft')})`}`)
                .join(', ')}
            </td>
            <td className="num">
              {formatUnits(pack.units)}
              {pack.netValue !== null && (
                <span className="block text-small text-soft">{formatMoney(pack.netValue, currency, 0)}</span>
              )}
            </td>
            <td className="whitespace-nowrap">
              {formatInstant(pack.at)}
              <span className="block text-small text-soft">{pack.by}</span>
            </td>
            <td>
              <button
                type="button"
                className="text-left font-[450] hover:text-moss"
                title={pack.sha256}
                aria-label={`${t('list.copy')}: ${pack.sha256}`}
                onClick={() => void copy(pack.sha256)}
              >
                <span className="block whitespace-nowrap">{shortChecksum(pack.sha256).slice(0, 9)}</span>
                <span className="block whitespace-nowrap text-soft">{shortChecksum(pack.sha256).slice(10)}</span>
              </button>
            </td>
            <td className="text-right whitespace-nowrap">
              {mayDownload && (
                <a
                  className="act"
                  href={apiPath(`/packs/${pack.id}/file`)}
                  download={pack.fileName}
                  aria-label={t('list.downloadNamed', { number: pack.number, size: formatBytes(pack.sizeBytes) })}
                >
                  {t('list.download')}
                </a>
              )}
              <span className="block text-small text-soft">{formatBytes(pack.sizeBytes)}</span>
            </td>
          </tr>
        ))}
      </tbody>
    </Table>
  );
}

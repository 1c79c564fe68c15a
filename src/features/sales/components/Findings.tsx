import { useTranslation } from 'react-i18next';
import type { ImportDetail } from '../../../../shared/contracts/sales.ts';
import { ArrowMark } from '../../../components/marks.tsx';
import { apiPath } from '../../../lib/api.ts';
import { formatUnits } from '../../../lib/format.ts';

type Finding = ImportDetail['findings'][number];
const verdicts = ['refused', 'repaired', 'noticed'] as const;

/** Rows left out and why, cells put right, and what is worth knowing; counted by kind, the first hundred in words. */
export function Findings({ detail }: { detail: ImportDetail }) {
  const { t } = useTranslation('sales');
  if (detail.findingCounts.length === 0) return <p className="text-soft">{t('findings.none')}</p>;
  return (
    <div className="grid gap-5">
      {verdicts.map((verdict) => {
        const count = detail.findingCounts
          .filter((entry) => entry.verdict === verdict && entry.kind !== 'mapping-incomplete')
          .reduce((sum, entry) => sum + entry.count, 0);
        if (count === 0) return null;
        const shown = detail.findings.filter(
          (finding) => finding.verdict === verdict && finding.kind !== 'mapping-incomplete',
        );
        return (
          <section key={verdict}>
            <div className="flex items-baseline justify-between gap-4">
              <h3>
                {t(`findings.${verdict}`)} <span className="font-normal text-soft">{formatUnits(count)}</span>
              </h3>
              {verdict === 'refused' && (
                <a className="act text-small" href={apiPath(`/imports/${detail.id}/refused.csv`)} download>
                  {t('findings.download')}
                </a>
              )}
            </div>
            <FindingTable verdict={verdict} findings={shown} />
            {shown.length < count && (
              <p className="mt-1 text-small text-soft">
                {t('findings.shown', { shown: formatUnits(shown.length), n: formatUnits(count) })}
              </p>
            )}
          </section>
        );
      })}
    </div>
  );
}

function FindingTable({ verdict, findings }: { verdict: (typeof verdicts)[number]; findings: Finding[] }) {
  const { t } = useTranslation('sales');
  return (
    <table className="ledger mt-1">
      <caption className="sr-only">{t('findings.caption', { verdict: t(`findings.${verdict}`) })}</caption>
      <thead className="sr-only">
        <tr>
          <th scope="col">{t('findings.where')}</th>
          <th scope="col">{t('findings.what')}</th>
          <th scope="col">{t('findings.becomes')}</th>
        </tr>
      </thead>
      <tbody className="[&>tr:first-child>*]:border-t [&>tr:first-child>*]:border-t-rule">
        {findings.map((finding, index) => (
          <tr key={index}>
            <td className="w-[120px] whitespace-nowrap">
              <span className="font-[560]">{whereOf(finding)}</span>
              {finding.row !== null && finding.cell !== null && (
                <span className="block text-small text-soft">{t('findings.row', { row: finding.row })}</span>
              )}
              {finding.row !== null && finding.cell === null && (
                <span className="text-small text-soft">{t('findings.row', { row: finding.row })}</span>
              )}
            </td>
            <td>{finding.detail}</td>
            <td className="w-[150px] text-right">
              {finding.before !== null && (
                <span className="text-madder line-through decoration-1 [overflow-wrap:anywhere]">
                  <span className="sr-only">{t('findings.before')}: </span>
                  {finding.before}
                </span>
              )}{' '}
              {verdict === 'repaired' && finding.after !== null && (
                <span className="inline-flex items-center gap-1.5 whitespace-nowrap">
                  <ArrowMark />
                  <b>{finding.after}</b>
                </span>
              )}
            </td>
          </tr>
        ))}
      </tbody>
    </table>
  );
}

function whereOf({ sheet, cell }: Finding): string {
  return [sheet, cell].filter((part) => part !== null && part !== '').join(', ');
}

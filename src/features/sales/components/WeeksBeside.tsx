import { useState } from 'react';
import { useTranslation } from 'react-i18next';
import type { ImportDetail } from '../../../../shared/contracts/sales.ts';
import { Button } from '../../../components/Button.tsx';
import { Section } from '../../../components/Page.tsx';
import { Table } from '../../../components/Table.tsx';
import { formatSigned, formatUnits, weekLabel } from '../../../lib/format.ts';

const few = 8;

/** Units of each week of the file beside what is held: new, the same, or different. */
export function WeeksBeside({ totals, isSales }: { totals: NonNullable<ImportDetail['totals']>; isSales: boolean }) {
  const { t } = useTranslation('sales');
  const [isAll, setAll] = useState(false);
  const weeks = isAll ? totals.byWeek : isSales ? totals.byWeek.slice(-few) : totals.byWeek.slice(0, few);
  const rows = totals.byWeek.reduce((sum, week) => sum + week.rows, 0);
  return (
    <Section title={t(isSales ? 'weeks.title' : 'weeks.titleCalendar')}>
      <Table caption={t('weeks.caption')}>
        <thead>
          <tr>
            <th scope="col">{t('weeks.week')}</th>
            <th scope="col" className="num">
              {t('weeks.rows')}
            </th>
            {isSales && (
              <>
                <th scope="col" className="num">
                  {t('weeks.file')}
                </th>
                <th scope="col" className="num">
                  {t('weeks.held')}
                </th>
                <th scope="col" className="num">
                  {t('weeks.difference')}
                </th>
                <th scope="col">{t('weeks.happens')}</th>
              </>
            )}
          </tr>
        </thead>
        <tbody>
          {weeks.map((week) => {
            const difference = week.units - (week.unitsHeld ?? 0);
            const isSame = week.unitsHeld !== null && Math.abs(difference) < 0.005;
            return (
              <tr key={week.weekStart}>
                <th scope="row" className="whitespace-nowrap">
                  {weekLabel(week.weekStart)}
                </th>
                <td className="num">{formatUnits(week.rows)}</td>
                {isSales && (
                  <>
                    <td className="num">{formatUnits(week.units)}</td>
                    <td className="num">
                      {week.unitsHeld === null ? (
                        <span className="text-soft">{t('weeks.none')}</span>
                      ) : (
                        formatUnits(week.unitsHeld)
                      )}
                    </td>
                    <td className="num">{formatSigned(difference)}</td>
                    <td className={isSame ? 'text-soft' : 'font-semibold'}>
                      {t(week.unitsHeld === null ? 'weeks.new' : isSame ? 'weeks.same' : 'weeks.changes')}
                    </td>
                  </>
                )}
              </tr>
            );
          })}
        </tbody>
        <tfoot>
          <tr>
            <th scope="row">{t('weeks.all', { count: totals.byWeek.length })}</th>
            <td className="num">{formatUnits(rows)}</td>
            {isSales && (
              <>
                <td className="num">{formatUnits(totals.units)}</td>
                <td colSpan={3} />
              </>
            )}
          </tr>
        </tfoot>
      </Table>
      <p className="mt-2 flex flex-wrap gap-x-4 text-small text-soft">
        {totals.keysHeld > 0 && (
          <span>
            {t('weeks.replaced', {
              rows: formatUnits(rows),
              held: formatUnits(totals.keysHeld),
              changed: formatUnits(totals.keysChanged),
            })}
          </span>
        )}
        {totals.byWeek.length > few && (
          <Button variant="text" className="!py-0 !text-small" onClick={() => setAll(!isAll)}>
            {isAll ? t('weeks.showFew') : t('weeks.showAll', { n: formatUnits(totals.byWeek.length) })}
          </Button>
        )}
      </p>
    </Section>
  );
}

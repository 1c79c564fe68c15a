import { useState } from 'react';
import { useTranslation } from 'react-i18next';
import { useNavigate } from 'react-router-dom';
import type { ImportDetail } from '../../../../shared/contracts/sales.ts';
import { Button, ButtonLink } from '../../../components/Button.tsx';
import { ProblemNote } from '../../../components/states.tsx';
import { showToast } from '../../../components/toasts.ts';
import { useCategoryInView, withCategory } from '../../../lib/categories.ts';
import { formatMoney, formatUnits } from '../../../lib/format.ts';
import { useCurrency } from '../../../lib/settings.ts';
import { useAcceptImport, useDropImport } from '../queries.ts';
import { WithdrawDialog } from './WithdrawDialog.tsx';

/** What the file amounts to, and the one decision about it; stays at the foot of the window. */
export function ImportBar({
  detail,
  isChanged,
  obstacle,
  isYesMissing,
  createUnknown,
}: {
  detail: ImportDetail;
  isChanged: boolean;
  /** What the server asks for before it accepts. */
  obstacle: string | null;
  isYesMissing: boolean;
  createUnknown: boolean;
}) {
  const { t } = useTranslation('sales');
  const navigate = useNavigate();
  const { category } = useCategoryInView();
  const accept = useAcceptImport(detail.id);
  const drop = useDropImport(detail.id);
  const [isWithdrawing, setWithdrawing] = useState(false);
  const { totals } = detail;
  const isOpen = detail.state === 'to-check';
  const canDrop = (isOpen || detail.state === 'refused') && detail.acceptedAt === null;

  const dropFile = async () => {
    try {
      await drop.mutateAsync(undefined);
      showToast({ tone: 'done', text: t('bar.dropped', { name: detail.fileName }) });
      await navigate(withCategory('/sales', category?.id ?? null));
    } catch {
      // Shown in the bar.
    }
  };
  const advice = isChanged ? t('bar.readAgain') : (obstacle ?? (isYesMissing ? t('unknown.needed') : null));

  if (!totals && !(canDrop && detail.mayAccept)) return null;
  return (
    <section
      aria-label={detail.fileName}
      className="bottom-0 -mx-6 [@media(min-height:560px)]:sticky mt-8 flex flex-wrap items-center justify-between gap-x-8 gap-y-2 border-t border-moss bg-moss-tint px-6 py-2.5"
    >
      {totals ? <Figures detail={detail} totals={totals} /> : <span />}
      <div className="flex items-center gap-6">
        <ProblemNote error={accept.error ?? drop.error} />
        {isOpen && advice !== null && detail.mayAccept && (
          <span id="accept-advice" className="max-w-[240px] text-small text-soft">
            {advice}
          </span>
        )}
        {canDrop && detail.mayAccept && (
          <Button variant="text" disabled={drop.isPending} onClick={() => void dropFile()}>
            {t('bar.drop')}
          </Button>
        )}
        {isOpen && detail.mayAccept && totals && (
          <Button
            aria-describedby={advice === null ? undefined : 'accept-advice'}
            disabled={advice !== null || totals.rowsTaken === 0 || accept.isPending}
            onClick={() => accept.mutate({ createUnknown })}
          >
            {t('bar.accept', { n: formatUnits(totals.rowsTaken) })}
          </Button>
        )}
        {detail.state === 'accepted' && detail.mayWithdraw && (
          <Button variant="text" onClick={() => setWithdrawing(true)}>
            {t('bar.withdraw')}
          </Button>
        )}
        {detail.state === 'accepted' && (
          <ButtonLink to={withCategory('/plan', category?.id ?? null)}>{t('bar.next')}</ButtonLink>
        )}
      </div>
      {isWithdrawing && <WithdrawDialog subject={detail} onClose={() => setWithdrawing(false)} />}
    </section>
  );
}

function Figures({ detail, totals }: { detail: ImportDetail; totals: NonNullable<ImportDetail['totals']> }) {
  const { t } = useTranslation('sales');
  const currency = useCurrency();
  const isSales = (detail.mapping?.kind ?? detail.kind) === 'sales';
  const figures: [string, string][] = [
    [t(detail.state === 'to-check' ? 'bar.rows' : 'bar.rowsTaken'), formatUnits(totals.rowsTaken)],
    [t('bar.repaired'), formatUnits(totals.rowsRepaired)],
    [t('bar.refused'), formatUnits(totals.rowsRefused)],
    [t('bar.weeks'), formatUnits(totals.weeks)],
    [t('bar.items'), formatUnits(totals.items)],
    [t('bar.locations'), formatUnits(totals.locations)],
  ];
  if (isSales) {
    figures.push([t('bar.units'), formatUnits(totals.units)]);
    if (totals.netValue !== 0) figures.push([t('bar.netValue'), formatMoney(totals.netValue, currency, 2)]);
  }
  return (
    <dl className="flex flex-wrap gap-x-7 gap-y-1">
      {figures.map(([name, value]) => (
        <div key={name}>
          <dt className="text-small text-soft">{name}</dt>
          <dd className="text-lead font-semibold">{value}</dd>
        </div>
      ))}
    </dl>
  );
}

import { useTranslation } from 'react-i18next';
import type { CalendarPromotion, CalendarView } from '../../../../shared/contracts/calendar.ts';
import { CloseButton } from '../../../components/CloseButton.tsx';
import { PennantMark } from '../../../components/marks.tsx';
import { formatNumber, formatPercent, formatWeekSpan } from '../../../lib/format.ts';

const most = 8;

/** Terms of one promotion. */
export function PromotionPanel({
  view,
  promotion,
  lastSalesWeek,
  onClose,
}: {
  view: CalendarView;
  promotion: CalendarPromotion | null;
  lastSalesWeek: string | null;
  onClose: () => void;
}) {
  const { t } = useTranslation('calendar');
  if (!promotion) {
    return view.promotions.length > 0 ? (
      <aside className="border-l border-line pl-6 text-soft">
        <p className="pt-1">{t('panel.hint')}</p>
      </aside>
    ) : null;
  }
  const names = new Map(view.lines.flatMap(({ items }) => items.map(({ id, name }) => [id, name] as const)));
  const locations = new Map(view.locations.map(({ id, name }) => [id, name]));
  const listNames = (all: string[]) =>
    all.length > most
      ? `${all.slice(0, most).join(', ')} ${t('panel.more', { n: formatNumber(all.length - most) })}`
      : all.join(', ');
  const share = (value: number, kind: 'feature' | 'display') => {
    if (value <= 0) return t('panel.none');
    return value >= 0.995 ? t(`panel.${kind}Yes`) : t(`panel.${kind}Share`, { share: formatPercent(value, 0) });
  };
  const mechanics = Object.entries(promotion.mechanics).filter(([, value]) => value > 0);
  const isEverywhere = promotion.locationIds.length === view.locations.length;
  const rows: [string, string][] = [
    [t('panel.weeks'), formatWeekSpan(promotion.firstWeek, promotion.lastWeek, t('common:to'))],
    [t('panel.depth'), promotion.depth === null ? t('panel.depthUnknown') : formatPercent(promotion.depth, 0)],
    [t('panel.items'), listNames(promotion.itemIds.map((id) => names.get(id) ?? `#${id}`))],
    [
      t('panel.locations'),
      isEverywhere
        ? t('panel.allLocations', { count: view.locations.length })
        : listNames(promotion.locationIds.map((id) => locations.get(id) ?? `#${id}`)),
    ],
    [t('panel.feature'), share(promotion.feature, 'feature')],
    [t('panel.display'), share(promotion.display, 'display')],
    [
      t('panel.mechanics'),
      mechanics.length === 0
        ? t('panel.none')
        : mechanics.map(([name, value]) => (value === 1 ? name : `${name} ${formatNumber(value)}`)).join(', '),
    ],
  ];
  const isSold = lastSalesWeek !== null && promotion.lastWeek <= lastSalesWeek;
  return (
    <aside className="border-l border-line pl-6" aria-label={promotion.name}>
      <div className="flex items-start justify-between gap-3">
        <h2 className="flex items-center gap-2">
          <PennantMark />
          {promotion.name}
        </h2>
        <CloseButton label={t('common:close')} onClick={onClose} />
      </div>
      <p className="text-small text-soft">{t(isSold ? 'panel.sold' : 'panel.planned')}</p>
      <dl className="mt-2">
        {rows.map(([name, value]) => (
          <div key={name} className="grid grid-cols-[92px_1fr] gap-3 border-b border-line py-1.5">
            <dt className="text-soft">{name}</dt>
            <dd>{value}</dd>
          </div>
        ))}
      </dl>
    </aside>
  );
}

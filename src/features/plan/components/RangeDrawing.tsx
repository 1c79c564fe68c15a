import { useTranslation } from 'react-i18next';
import { formatUnits } from '../../../lib/format.ts';

interface RangeDrawingProps {
  low95: number;
  low80: number;
  high80: number;
  high95: number;
  model: number;
  plan: number;
  lastYear: number | null;
}

const width = 299;
const margin = 11;
/** Ranges are of the unrounded model: small ones keep a decimal. */
const figure = (units: number) => formatUnits(units, Math.abs(units) < 10 ? 1 : 0);

/** The model's 80 and 95 % range as bands, with model, plan and last year on them. */
export function RangeDrawing({ low95, low80, high80, high95, model, plan, lastYear }: RangeDrawingProps) {
  const { t } = useTranslation('plan');
  const points = [low95, high95, plan, model, ...(lastYear === null ? [] : [lastYear])];
  const least = Math.min(...points);
  const span = Math.max(...points) - least || 1;
  const x = (value: number) => margin + ((value - least) / span) * (width - 2 * margin);
  const isPlanApart = Math.abs(plan - model) > 1e-9;
  const modelFirst = model <= plan;
  const label = t('why.rangeLabel', {
    low80: figure(low80),
    high80: figure(high80),
    low95: figure(low95),
    high95: figure(high95),
    model: figure(model),
    plan: figure(plan),
  });
  /** `room` = the width that the words may take. */
  const anchor = (value: number, before: boolean, room = 44) => {
    if (x(value) < room) return 'start';
    if (x(value) > width - room) return 'end';
    return before ? 'end' : 'start';
  };
  return (
    <svg className="mt-1 block w-full" viewBox={`0 0 ${width} 66`} role="img" aria-label={label}>
      <rect x={x(low95)} y="20" width={Math.max(1, x(high95) - x(low95))} height="14" fill="var(--sky-tint)" />
      <rect x={x(low80)} y="20" width={Math.max(1, x(high80) - x(low80))} height="14" fill="var(--sky-mid)" />
      <path d={`M${x(model)} 17V37`} stroke="var(--sky)" strokeWidth="2" />
      <text
        x={x(model)}
        y="13"
        fontSize="11"
        fontWeight="600"
        fill="var(--sky)"
        textAnchor={isPlanApart ? anchor(model, modelFirst) : anchor(model, false)}
      >
        {t('why.model')}
      </text>
      {isPlanApart && (
        <>
          <path d={`M${x(plan)} 17V37`} stroke="var(--plum)" strokeWidth="2.4" strokeDasharray="4 2" />
          <text
            x={x(plan)}
            y="13"
            fontSize="11"
            fontWeight="600"
            fill="var(--plum)"
            textAnchor={anchor(plan, !modelFirst)}
          >
            {t('why.planShort')}
          </text>
        </>
      )}
      {lastYear !== null && (
        <>
          <circle cx={x(lastYear)} cy="27" r="3.5" fill="var(--ink)" stroke="var(--sheet)" />
          <text x={x(lastYear)} y="47" fontSize="11" fill="var(--soft)" textAnchor={anchor(lastYear, false, 96)}>
            {t('why.lastYearShort', { units: figure(lastYear) })}
          </text>
        </>
      )}
      <rect x="0" y="55" width="9" height="9" fill="var(--sky-mid)" />
      <text x="14" y="64" fontSize="11" fill="var(--soft)">
        {t('why.range80', { low: figure(low80), high: figure(high80) })}
      </text>
      <rect x="157.5" y="55.5" width="8" height="8" fill="var(--sky-tint)" stroke="var(--sky-mid)" />
      <text x="171" y="64" fontSize="11" fill="var(--soft)">
        {t('why.range95', { low: figure(low95), high: figure(high95) })}
      </text>
    </svg>
  );
}

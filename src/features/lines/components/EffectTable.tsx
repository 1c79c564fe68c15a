import { useState } from 'react';
import { Trans, useTranslation } from 'react-i18next';
import type { LineFitView } from '../../../../shared/contracts/lines.ts';
import { addDays } from '../../../../shared/domain/weeks.ts';
import { Button } from '../../../components/Button.tsx';
import { Section } from '../../../components/Page.tsx';
import { formatFactor, formatMonth, formatPercent } from '../../../lib/format.ts';
import { type Effect, listEffects, readSeasonSpan } from '../effects.ts';

const chartWidth = 220;

/** Size and range of each effect in a sentence, and on one scale of factors. */
export function EffectTable({ coefficients }: { coefficients: NonNullable<LineFitView['fit']>['coefficients'] }) {
  const { t } = useTranslation('lines');
  const [areHolidaysShown, setHolidaysShown] = useState(false);
  const all = listEffects(coefficients);
  const holidays = all.filter(({ group }) => group === 'holiday');
  const effects = areHolidaysShown ? all : all.filter(({ group }) => group !== 'holiday');
  const season = readSeasonSpan(coefficients);
  const seasonMonths = season && {
    high: formatMonth(addDays('2025-01-01', season.highestDay)),
    low: formatMonth(addDays('2025-01-01', season.lowestDay)),
  };
  const ends = effects.flatMap(({ factor, low, high }) => [factor, low ?? factor, high ?? factor]);
  const reach = Math.min(Math.log(6), Math.max(Math.log(1.5), ...ends.map((factor) => Math.abs(Math.log(factor)))));
  const xOf = (factor: number) =>
    chartWidth / 2 + (Math.max(-reach, Math.min(reach, Math.log(factor))) / reach) * (chartWidth / 2 - 14);
  const ticks = [0.25, 0.5, 0.75, 1, 1.5, 2, 4].filter((factor) => Math.abs(Math.log(factor)) <= reach * 0.95);
  return (
    <Section title={t('effects.title')}>
      <table className="w-full border-collapse">
        <caption className="sr-only">{t('effects.caption')}</caption>
        <thead>
          <tr className="border-b border-rule text-left text-tiny text-soft">
            <th scope="col" className="pb-1 font-normal">
              {t('effects.effect')}
            </th>
            <th scope="col" className="pb-1 text-center font-normal">
              {t('effects.times')}
            </th>
          </tr>
        </thead>
        <tbody>
          {effects.map((effect, index) => (
            <tr key={`${effect.sentence}-${effect.name}-${index}`} className="border-b border-line">
              <th scope="row" className="py-1.5 pr-4 text-left font-normal">
                <Sentence effect={effect} seasonMonths={seasonMonths} />
              </th>
              <td className="p-0" style={{ width: chartWidth }}>
                <Whisker effect={effect} xOf={xOf} ticks={ticks} />
              </td>
            </tr>
          ))}
        </tbody>
        <tfoot aria-hidden="true">
          <tr>
            <td />
            <td>
              <svg width={chartWidth} height="16" className="block">
                {ticks.map((factor) => (
                  <text key={factor} x={xOf(factor)} y="12" textAnchor="middle" fontSize="11" fill="var(--soft)">
                    {formatFactor(factor, factor === 1 || factor >= 2 ? 0 : 2)}
                  </text>
                ))}
              </svg>
            </td>
          </tr>
        </tfoot>
      </table>
      {holidays.length > 0 && (
        <Button variant="text" onClick={() => setHolidaysShown(!areHolidaysShown)}>
          {areHolidaysShown ? t('effects.holidaysHidden') : t('effects.holidaysShown', { n: holidays.length })}
        </Button>
      )}
      <p className="mt-2 text-small text-soft">{t('effects.note')}</p>
    </Section>
  );
}

function Sentence({ effect, seasonMonths }: { effect: Effect; seasonMonths: { high: string; low: string } | null }) {
  const { t } = useTranslation('lines');
  const change = (factor: number) => {
    const percent = formatPercent(Math.abs(factor - 1), Math.abs(factor - 1) < 0.095 ? 1 : 0);
    if (Math.abs(factor - 1) < 0.0005) return t('effects.same');
    return t(factor > 1 ? 'effects.more' : 'effects.less', { change: percent });
  };
  return (
    <>
      <span className="block">
        <Trans
          t={t}
          i18nKey={`effects.sentence.${effect.sentence}`}
          values={{ name: effect.name, change: change(effect.factor), ...seasonMonths }}
          components={{ 1: <b /> }}
        />
      </span>
      <span className="block text-soft">
        {effect.low === null || effect.high === null
          ? t('effects.noRange')
          : t(effect.isUncertain ? 'effects.uncertain' : 'effects.range', {
              low: change(effect.low),
              high: change(effect.high),
            })}
      </span>
    </>
  );
}

function Whisker({ effect, xOf, ticks }: { effect: Effect; xOf: (factor: number) => number; ticks: number[] }) {
  const x = xOf(effect.factor);
  const y = 26;
  return (
    <svg width={chartWidth} height="52" className="block" aria-hidden="true">
      {ticks.map((factor) => (
        <path
          key={factor}
          d={`M${xOf(factor)} 0V52`}
          stroke={factor === 1 ? 'var(--rule)' : 'var(--line)'}
          strokeWidth={factor === 1 ? 1.2 : 1}
        />
      ))}
      {effect.low !== null && effect.high !== null && (
        <>
          <rect
            x={xOf(effect.low)}
            y={y - 3.5}
            width={Math.max(1, xOf(effect.high) - xOf(effect.low))}
            height="7"
            fill="var(--sky-mid)"
          />
          <path
            d={`M${xOf(effect.low)} ${y - 5.5}v11M${xOf(effect.high)} ${y - 5.5}v11`}
            stroke="var(--sky)"
            strokeWidth="1.2"
          />
        </>
      )}
      <path
        d={`M${x} ${y - 6}l6 6l-6 6l-6 -6Z`}
        fill={effect.isUncertain ? 'var(--paper)' : 'var(--sky)'}
        stroke="var(--sky)"
        strokeWidth="1.3"
      />
    </svg>
  );
}

import { useState } from 'react';
import { Trans, useTranslation } from 'react-i18next';
import type { LineFitView } from '../../../../shared/contracts/lines.ts';
import { addDays } from '../../../../shared/domain/weeks.ts';
import { Button } from '../../../components/Button.tsx';
import { Section } from '../../../components/Page.tsx';
import { Table } from '../../../components/Table.tsx';
import { formatFactor, formatMonth, formatPercent } from '../../../lib/format.ts';
import { type Effect, listEffects, readSeasonSpan } from '../effects.ts';
import { EvidenceBar } from './EvidenceBar.tsx';

const chartWidth = 196;
const tickGap = 36;

type Names = LineFitView['names'];
type SeasonMonths = { high: string; low: string } | null;

/** Size and range of each effect in a sentence and on one scale of factors, and whose evidence it is. */
export function EffectTable({ fit, names }: { fit: NonNullable<LineFitView['fit']>; names: Names }) {
  const { t } = useTranslation('lines');
  const [areHolidaysShown, setHolidaysShown] = useState(false);
  const [isTable, setTable] = useState(false);
  const { coefficients, diagnosis } = fit;
  const all = listEffects(coefficients, diagnosis?.effects);
  const holidays = all.filter(({ group }) => group === 'holiday');
  const effects = areHolidaysShown ? all : all.filter(({ group }) => group !== 'holiday');
  const season = readSeasonSpan(coefficients);
  const seasonMonths = season && {
    high: formatMonth(addDays('2025-01-01', season.highestDay)),
    low: formatMonth(addDays('2025-01-01', season.lowestDay)),
  };
  if (all.length === 0) {
    return (
      <Section title={t('effects.title')}>
        <p className="text-soft">{t('effects.none')}</p>
      </Section>
    );
  }
  return (
    <Section
      title={t('effects.title')}
      aside={
        <Button variant="text" onClick={() => setTable(!isTable)}>
          {t(isTable ? 'effects.asWords' : 'effects.asTable')}
        </Button>
      }
    >
      {isTable ? (
        <EffectFigures effects={effects} names={names} seasonMonths={seasonMonths} />
      ) : (
        <EffectSentences effects={effects} names={names} seasonMonths={seasonMonths} hasEvidence={diagnosis !== null} />
      )}
      {holidays.length > 0 && (
        <Button variant="text" onClick={() => setHolidaysShown(!areHolidaysShown)}>
          {areHolidaysShown ? t('effects.holidaysHidden') : t('effects.holidaysShown', { n: holidays.length })}
        </Button>
      )}
      <p className="mt-2 text-small text-soft">
        {t('effects.note')} {diagnosis && t('evidence.note')}
      </p>
    </Section>
  );
}

function EffectSentences({
  effects,
  names,
  seasonMonths,
  hasEvidence,
}: {
  effects: readonly Effect[];
  names: Names;
  seasonMonths: SeasonMonths;
  hasEvidence: boolean;
}) {
  const { t } = useTranslation('lines');
  const ends = effects.flatMap(({ factor, low, high }) => [factor, low ?? factor, high ?? factor]);
  const reach = Math.min(Math.log(6), Math.max(Math.log(1.5), ...ends.map((factor) => Math.abs(Math.log(factor)))));
  const xOf = (factor: number) =>
    chartWidth / 2 + (Math.max(-reach, Math.min(reach, Math.log(factor))) / reach) * (chartWidth / 2 - 14);
  const ticks = chooseTicks(reach, xOf);
  return (
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
          {hasEvidence && (
            <th scope="col" className="pb-1 pl-4 font-normal">
              {t('evidence.title')}
            </th>
          )}
        </tr>
      </thead>
      <tbody>
        {effects.map((effect, index) => (
          <tr key={`${effect.sentence}-${effect.name}-${index}`} className="border-b border-line">
            <th scope="row" className="py-1.5 pr-4 text-left font-normal">
              <Sentence effect={effect} names={names} seasonMonths={seasonMonths} />
            </th>
            <td className="relative p-0" style={{ width: chartWidth }}>
              <Whisker effect={effect} xOf={xOf} ticks={ticks} />
            </td>
            {hasEvidence && (
              <td className="w-[112px] py-1.5 pl-4">
                <EvidenceBar share={effect.share} />
              </td>
            )}
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
                  {formatFactor(factor, factor % 1 === 0 ? 0 : factor > 1 ? 1 : 2)}
                </text>
              ))}
            </svg>
          </td>
          {hasEvidence && <td />}
        </tr>
      </tfoot>
    </table>
  );
}

/** Round factors within reach whose labels don't touch, × 1 first. */
function chooseTicks(reach: number, xOf: (factor: number) => number): number[] {
  const chosen: number[] = [];
  for (const factor of [1, 2, 0.5, 4, 0.25, 1.5, 0.75]) {
    const isWithin = Math.abs(Math.log(factor)) <= reach * 0.95;
    if (isWithin && chosen.every((other) => Math.abs(xOf(other) - xOf(factor)) >= tickGap)) chosen.push(factor);
  }
  return chosen;
}

/** `14 % more`, `6.1 % less`, `as much`. */
function useChange(): (factor: number) => string {
  const { t } = useTranslation('lines');
  return (factor) => {
    if (Math.abs(factor - 1) < 0.0005) return t('effects.same');
    const percent = formatPercent(Math.abs(factor - 1), Math.abs(factor - 1) < 0.095 ? 1 : 0);
    return t(factor > 1 ? 'effects.more' : 'effects.less', { change: percent });
  };
}

function Sentence({ effect, names, seasonMonths }: { effect: Effect; names: Names; seasonMonths: SeasonMonths }) {
  const { t } = useTranslation('lines');
  const change = useChange();
  const { share, inseparableFrom, low, high } = effect;
  const isInseparable = inseparableFrom.length > 0;
  const range = () => {
    if (isInseparable)
      return t('effects.inseparable', {
        others: inseparableFrom.map((name) => t('effects.quoted', { name })).join(', '),
      });
    if (low === null || high === null) return t('effects.noRange');
    return t(effect.isUncertain ? 'effects.uncertain' : 'effects.range', { low: change(low), high: change(high) });
  };
  return (
    <>
      <span className="block">
        {isInseparable ? (
          <span className="font-[560]">
            {t(`effects.subject.${effect.sentence}`, { name: effect.name, ...seasonMonths })}
          </span>
        ) : (
          <Trans
            t={t}
            i18nKey={`effects.sentence.${effect.sentence}`}
            values={{ name: effect.name, change: change(effect.factor), ...seasonMonths }}
            components={{ 1: <b /> }}
          />
        )}
      </span>
      <span className={`block ${isInseparable ? 'text-turmeric' : 'text-soft'}`}>{range()}</span>
      {share && share.most.factor / share.least.factor > 1.02 && !isInseparable && (
        <span className="block text-small text-soft">
          {t('evidence.between', {
            least: change(share.least.factor),
            leastName: names[share.level][share.least.name] ?? share.least.name,
            most: change(share.most.factor),
            mostName: names[share.level][share.most.name] ?? share.most.name,
          })}
        </span>
      )}
    </>
  );
}

/** The factor as a lozenge on its range; an effect that can't be told apart has its range alone, in dashes. */
function Whisker({ effect, xOf, ticks }: { effect: Effect; xOf: (factor: number) => number; ticks: number[] }) {
  const x = xOf(effect.factor);
  const isInseparable = effect.inseparableFrom.length > 0;
  const { low, high } = effect;
  return (
    <svg width={chartWidth} className="absolute inset-0 h-full" aria-hidden="true">
      {ticks.map((factor) => (
        <line
          key={factor}
          x1={xOf(factor)}
          x2={xOf(factor)}
          y1="0"
          y2="100%"
          stroke={factor === 1 ? 'var(--rule)' : 'var(--line)'}
          strokeWidth={factor === 1 ? 1.2 : 1}
        />
      ))}
      <svg y="50%" overflow="visible">
        {low !== null && high !== null && !isInseparable && (
          <>
            <rect x={xOf(low)} y={-3.5} width={Math.max(1, xOf(high) - xOf(low))} height="7" fill="var(--sky-mid)" />
            <path d={`M${xOf(low)} -5.5v11M${xOf(high)} -5.5v11`} stroke="var(--sky)" strokeWidth="1.2" />
          </>
        )}
        {low !== null && high !== null && isInseparable && (
          <path
            d={`M${xOf(low)} 0H${xOf(high)}`}
            stroke="var(--turmeric)"
            strokeWidth="1.6"
            strokeDasharray="3 4"
            fill="none"
          />
        )}
        {!isInseparable && (
          <path
            d={`M${x} -6l6 6l-6 6l-6 -6Z`}
            fill={effect.isUncertain ? 'var(--paper)' : 'var(--sky)'}
            stroke="var(--sky)"
            strokeWidth="1.3"
          />
        )}
      </svg>
    </svg>
  );
}

function EffectFigures({
  effects,
  names,
  seasonMonths,
}: {
  effects: readonly Effect[];
  names: Names;
  seasonMonths: SeasonMonths;
}) {
  const { t } = useTranslation('lines');
  const factorOf = (factor: number | null) => (factor === null ? t('effects.unknown') : formatFactor(factor, 3));
  return (
    <div className="overflow-x-auto" tabIndex={0} role="region" aria-label={t('effects.caption')}>
      <Table caption={t('effects.caption')}>
        <thead>
          <tr>
            <th scope="col">{t('effects.effect')}</th>
            <th scope="col" className="num">
              {t('effects.factor')}
            </th>
            <th scope="col" className="num">
              {t('effects.from')}
            </th>
            <th scope="col" className="num">
              {t('effects.to')}
            </th>
            <th scope="col" className="num">
              {t('evidence.own')}
            </th>
            <th scope="col">{t('evidence.least')}</th>
            <th scope="col">{t('evidence.most')}</th>
          </tr>
        </thead>
        <tbody>
          {effects.map((effect, index) => (
            <tr key={index}>
              <th scope="row">
                {t(`effects.subject.${effect.sentence}`, { name: effect.name, ...seasonMonths })}
                {effect.inseparableFrom.length > 0 && (
                  <span className="block text-turmeric">
                    {t('effects.inseparable', {
                      others: effect.inseparableFrom.map((name) => t('effects.quoted', { name })).join(', '),
                    })}
                  </span>
                )}
              </th>
              <td className="num">{factorOf(effect.factor)}</td>
              <td className="num">{factorOf(effect.low)}</td>
              <td className="num">{factorOf(effect.high)}</td>
              <td className="num">{effect.share ? formatPercent(effect.share.own, 0) : t('effects.unknown')}</td>
              {[effect.share?.least, effect.share?.most].map((end, k) => (
                <td key={k}>
                  {end && effect.share
                    ? `${factorOf(end.factor)} ${names[effect.share.level][end.name] ?? end.name}`
                    : t('effects.unknown')}
                </td>
              ))}
            </tr>
          ))}
        </tbody>
      </Table>
    </div>
  );
}

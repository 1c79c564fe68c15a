import type { DiagnosedEffect, EffectEvidence, LineFitView } from '../../../shared/contracts/lines.ts';

type Fit = NonNullable<LineFitView['fit']>;
type Coefficient = Fit['coefficients'][number];

/** How far the items (or locations) of a line say an effect themselves, and how far apart they lie, as factors. */
export interface EffectShare {
  level: 'items' | 'locations';
  /** Their own evidence, 0…1; the rest is the line's. */
  own: number;
  least: { name: string; factor: number };
  most: { name: string; factor: number };
}

/** One effect as people speak of it: what the units are multiplied by when something happens, with its 95 % range. */
export interface Effect {
  /** Key of the sentence; `holiday` and `mechanic` take the name. */
  sentence: string;
  name: string;
  group: string;
  factor: number;
  /** Null where no range can be told (season: several coefficients together). */
  low: number | null;
  high: number | null;
  /** The range holds 1. */
  isUncertain: boolean;
  /** Names of the coefficients that it can't be told apart from, season's waves as `season`. */
  inseparableFrom: string[];
  /** Null where the whole line shares the effect. */
  share: EffectShare | null;
}

/** Share of the ups and downs within the series that the fit explains, 0…1. */
export function readExplainedShare({ rSquared, diagnosis }: Fit): number {
  return diagnosis?.rSquaredWithin ?? rSquared;
}

const spoken: Readonly<Record<string, { sentence: string; move: number }>> = {
  'regular price': { sentence: 'regular-price', move: Math.log(1.1) },
  'price paid': { sentence: 'price-paid', move: Math.log(1.1) },
  'price cut': { sentence: 'price-cut', move: Math.log(0.8) },
  'advertised price': { sentence: 'advertised-price', move: Math.log(0.8) },
  'fresh advertised cut': { sentence: 'fresh-advertised-cut', move: -Math.log(0.8) },
  feature: { sentence: 'feature', move: 1 },
  display: { sentence: 'display', move: 1 },
  'feature only': { sentence: 'feature', move: 1 },
  'display only': { sentence: 'display', move: 1 },
  'feature and display': { sentence: 'feature-and-display', move: 1 },
  'cut one week earlier': { sentence: 'cut-one-week-earlier', move: -Math.log(0.8) },
  'cut two weeks earlier': { sentence: 'cut-two-weeks-earlier', move: -Math.log(0.8) },
  'cut one week ahead': { sentence: 'cut-one-week-ahead', move: -Math.log(0.8) },
  "neighbours' price": { sentence: 'neighbours-price', move: Math.log(0.9) },
  "neighbours' promotion": { sentence: 'neighbours-promotion', move: 1 },
  "neighbours' attraction": { sentence: 'neighbours-attraction', move: Math.log(1.1) },
  trend: { sentence: 'trend', move: 1 },
};

/** Size and error, in ln units, up to which a coefficient was held at 0 by a penalty. */
const takenAsNone = 1e-6;

const holidayPattern = /^(.*): week (before|of|after)$/;
const wavePattern = /^season (sine|cosine) (\d+)$/;

/**
 * Coefficients in ln units, turned into factors of the units for a move that people know; season as one effect, highest against lowest
 * month. One that was taken as none (0 with hardly any error, by a penalty: its sign couldn't be) is left out. `diagnosed`: what the fit's diagnosis says of each.
 */
export function listEffects(
  coefficients: readonly Coefficient[],
  diagnosed: readonly DiagnosedEffect[] = [],
): Effect[] {
  const diagnosisOf = new Map(diagnosed.map((effect) => [effect.name, effect]));
  const effects = coefficients
    .filter(
      ({ group, estimate, standardError }) =>
        group !== 'season' && Math.max(Math.abs(estimate), standardError) > takenAsNone,
    )
    .map((coefficient) => toEffect(coefficient, diagnosisOf.get(coefficient.name)));
  const season = readSeason(coefficients, diagnosed);
  return season ? [...effects, season] : effects;
}

function toEffect(coefficient: Coefficient, diagnosed: DiagnosedEffect | undefined): Effect {
  const known = spoken[coefficient.name];
  const holiday = holidayPattern.exec(coefficient.name);
  const { sentence, move } = known ?? {
    sentence: holiday ? `holiday-${holiday[2] ?? 'of'}` : coefficient.group === 'promotion' ? 'mechanic' : 'other',
    move: 1,
  };
  const ends = [Math.exp(coefficient.low95 * move), Math.exp(coefficient.high95 * move)] as const;
  const low = Math.min(...ends);
  const high = Math.max(...ends);
  return {
    sentence,
    name: holiday?.[1] ?? coefficient.name,
    group: coefficient.group,
    factor: Math.exp(coefficient.estimate * move),
    low,
    high,
    isUncertain: low <= 1 && high >= 1,
    inseparableFrom: joinSeason(diagnosed?.inseparableFrom ?? []),
    share: diagnosed ? toShare(diagnosed, move) : null,
  };
}

/** Items where there are several, else locations. */
function toShare({ items, locations }: DiagnosedEffect, move: number): EffectShare | null {
  const ofLevel = (level: EffectShare['level'], { own, lowest, highest }: EffectEvidence): EffectShare => {
    const ends = [lowest, highest]
      .map(({ name, slope }) => ({ name, factor: Math.exp(slope * move) }))
      .sort((a, b) => a.factor - b.factor);
    return { level, own, least: ends[0]!, most: ends[1]! };
  };
  if (items) return ofLevel('items', items);
  return locations ? ofLevel('locations', locations) : null;
}

function joinSeason(names: readonly string[]): string[] {
  return [...new Set(names.map((name) => (wavePattern.test(name) ? 'season' : name)))];
}

/** Day of the year with the highest and the lowest season, and what lies between them. */
export interface SeasonSpan {
  highestDay: number;
  lowestDay: number;
  factor: number;
}

export function readSeasonSpan(coefficients: readonly Coefficient[]): SeasonSpan | null {
  const waves = coefficients.flatMap(({ name, estimate }) => {
    const match = wavePattern.exec(name);
    return match ? [{ isSine: match[1] === 'sine', pair: Number(match[2]), estimate }] : [];
  });
  if (waves.length === 0) return null;
  // The columns count days from 1970-01-01; a leap year's shift of a day doesn't move a month.
  const levels = Array.from({ length: 365 }, (_, day) =>
    waves.reduce((sum, { isSine, pair, estimate }) => {
      const angle = (2 * Math.PI * pair * day) / 365.25;
      return sum + estimate * (isSine ? Math.sin(angle) : Math.cos(angle));
    }, 0),
  );
  const highestDay = levels.indexOf(Math.max(...levels));
  const lowestDay = levels.indexOf(Math.min(...levels));
  return { highestDay, lowestDay, factor: Math.exp((levels[highestDay] ?? 0) - (levels[lowestDay] ?? 0)) };
}

function readSeason(coefficients: readonly Coefficient[], diagnosed: readonly DiagnosedEffect[]): Effect | null {
  const span = readSeasonSpan(coefficients);
  if (!span) return null;
  const others = diagnosed.flatMap(({ group, inseparableFrom }) => (group === 'season' ? inseparableFrom : []));
  return {
    sentence: 'season',
    name: 'season',
    group: 'season',
    factor: span.factor,
    low: null,
    high: null,
    isUncertain: false,
    inseparableFrom: joinSeason(others).filter((name) => name !== 'season'),
    share: null,
  };
}

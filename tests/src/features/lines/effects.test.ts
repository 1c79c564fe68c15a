import { describe, expect, it } from 'vitest';
import type { DiagnosedEffect } from '../../../../shared/contracts/lines.ts';
import { listEffects, readSeasonSpan } from '../../../../src/features/lines/effects.ts';
import { groupFindings } from '../../../../src/features/lines/findings.ts';

const coefficient = (name: string, group: string, estimate: number, spread = 0.1) => ({
  name,
  group,
  estimate,
  standardError: spread / 2,
  low95: estimate - spread,
  high95: estimate + spread,
});

const diagnosed = (name: string, over: Partial<DiagnosedEffect>): DiagnosedEffect => ({
  name,
  group: 'promotion',
  estimate: 0,
  errors: null,
  varianceInflation: null,
  inseparableFrom: [],
  items: null,
  locations: null,
  ...over,
});

describe('effects', () => {
  it('turn an elasticity into what a price 10 % higher does, its range in order', () => {
    const [effect] = listEffects([coefficient('regular price', 'price', -1.5)]);
    expect(effect?.sentence).toBe('regular-price');
    expect(effect?.factor).toBeCloseTo(1.1 ** -1.5, 12);
    expect(effect?.low).toBeCloseTo(1.1 ** -1.6, 12);
    expect(effect?.high).toBeCloseTo(1.1 ** -1.4, 12);
    expect(effect?.isUncertain).toBe(false);
  });

  it('turn the slope of a price cut into what 20 % off does', () => {
    const [effect] = listEffects([coefficient('price cut', 'promotion', -2.5)]);
    expect(effect?.factor).toBeCloseTo(0.8 ** -2.5, 12);
    expect(effect?.low).toBeLessThan(effect?.high ?? 0);
  });

  it('speak of an advertised price and of its first week as what 20 % off adds', () => {
    const [advertised, fresh] = listEffects([
      coefficient('advertised price', 'promotion', -0.5),
      coefficient('fresh advertised cut', 'promotion', 0.5),
    ]);
    expect(advertised).toMatchObject({ sentence: 'advertised-price', factor: expect.closeTo(0.8 ** -0.5, 12) });
    expect(fresh).toMatchObject({ sentence: 'fresh-advertised-cut', factor: expect.closeTo(0.8 ** -0.5, 12) });
  });

  it('turn a dip after a cut into less', () => {
    const [effect] = listEffects([coefficient('cut one week earlier', 'around', -0.4)]);
    expect(effect?.factor).toBeCloseTo(Math.exp(0.4 * Math.log(0.8)), 12);
  });

  it('say when they can’t be told from nothing', () => {
    const [effect] = listEffects([coefficient('multibuy', 'promotion', 0.05)]);
    expect(effect).toMatchObject({ sentence: 'mechanic', name: 'multibuy', isUncertain: true });
  });

  it('name holidays by the week they speak of', () => {
    const [effect] = listEffects([coefficient('Twelfth Night: week before', 'holiday', 0.2)]);
    expect(effect).toMatchObject({ sentence: 'holiday-before', name: 'Twelfth Night' });
  });

  it('leave out what was taken as none', () => {
    expect(listEffects([coefficient('coupon', 'promotion', 0, 0)])).toEqual([]);
    expect(listEffects([coefficient('coupon', 'promotion', 0, 1e-9)])).toEqual([]);
  });

  it('say which items lie lowest and highest, as factors, and whose evidence it is', () => {
    const [effect] = listEffects(
      [coefficient('price cut', 'promotion', -2.5)],
      [
        diagnosed('price cut', {
          items: {
            own: 0.6,
            withOwnSlope: 3,
            members: 4,
            lowest: { name: 'a', slope: -3 },
            highest: { name: 'b', slope: -2 },
          },
        }),
      ],
    );
    expect(effect?.share).toMatchObject({ level: 'items', own: 0.6, least: { name: 'b' }, most: { name: 'a' } });
    expect(effect?.share?.least.factor).toBeCloseTo(0.8 ** -2, 12);
    expect(effect?.share?.most.factor).toBeCloseTo(0.8 ** -3, 12);
  });

  it('name what they can’t be told apart from, the season’s waves once', () => {
    const effects = listEffects(
      [coefficient('trend', 'trend', 0.1), coefficient('season cosine 1', 'season', 0.3)],
      [
        diagnosed('trend', { inseparableFrom: ['season cosine 1', 'season sine 1'] }),
        diagnosed('season cosine 1', { group: 'season', inseparableFrom: ['trend', 'season sine 1'] }),
      ],
    );
    expect(effects.map(({ inseparableFrom }) => inseparableFrom)).toEqual([['season'], ['trend']]);
    expect(effects[0]?.share).toBeNull();
  });

  it('join the season’s waves into highest against lowest day', () => {
    const season = [coefficient('season cosine 1', 'season', 0.3), coefficient('season sine 1', 'season', 0)];
    const span = readSeasonSpan(season);
    expect(span?.highestDay).toBe(0);
    expect(Math.abs((span?.lowestDay ?? 0) - 183)).toBeLessThanOrEqual(1);
    expect(span?.factor).toBeCloseTo(Math.exp(0.6), 3);
    expect(listEffects(season)).toMatchObject([{ sentence: 'season', low: null, high: null }]);
  });
});

describe('findings', () => {
  it('that say the same of several places are said once', () => {
    const groups = groupFindings([
      { kind: 'series-too-thin', item: 'A', location: 'North', values: { weeks: 3 } },
      { kind: 'column-never-happened', values: { column: 'display' } },
      { kind: 'series-too-thin', item: 'B', location: 'North', values: { weeks: 5 } },
      { kind: 'column-never-happened', values: { column: 'coupon' } },
    ]);
    expect(groups.map(({ kind, places }) => [kind, places])).toEqual([
      ['series-too-thin', ['A, North', 'B, North']],
      ['column-never-happened', []],
      ['column-never-happened', []],
    ]);
  });
});

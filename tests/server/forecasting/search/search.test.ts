import { describe, expect, it } from 'vitest';
import { buildLinePanel } from '../../../../server/forecasting/features/line-panel.ts';
import { forecastLine } from '../../../../server/forecasting/forecast-line.ts';
import { chooseSpecification, hasEarned } from '../../../../server/forecasting/search/choose-specification.ts';
import { buildRollingFrame } from '../../../../server/forecasting/search/rolling-frame.ts';
import { crpsOfSample } from '../../../../server/forecasting/search/score.ts';
import { generateLine } from '../canonical-line.ts';

const scoreOf = (...byOrigin: number[]): Parameters<typeof hasEarned>[0] => ({
  crps: 0,
  wape: 0,
  byOrigin: Float64Array.from(byOrigin),
});

describe('the search over specifications', () => {
  it('scores a sample by its mean distance less half its own spread', () => {
    // By hand: mean |x − 2| = (1 + 0 + 2)/3 = 1; mean |x − x′| over all nine pairs = 2·(1 + 3 + 2)/9 = 12/9.
    expect(crpsOfSample(Float64Array.of(1, 2, 4), 2)).toBeCloseTo(1 - 12 / 18, 12);
    expect(crpsOfSample(Float64Array.of(3, 3, 3), 5)).toBe(2);
  });

  it('lets in only what gains at most origins', () => {
    expect(hasEarned(scoreOf(9, 9.1, 8.9, 9), scoreOf(10, 10, 10, 10))).toBe(true);
    expect(hasEarned(scoreOf(4, 12, 11, 12), scoreOf(10, 10, 10, 10))).toBe(false);
  });

  it('finds a strong season that is there and none where there is none', () => {
    const plain = generateLine({ items: 5, weeks: 156, noise: 0.15 });
    const seasonal = {
      ...plain,
      series: plain.series.map((series) => ({
        ...series,
        sold: series.sold.map((week, t) => ({
          ...week,
          units: Math.max(1, Math.round(week.units * Math.exp(0.6 * Math.sin((2 * Math.PI * t) / 52.18)))),
        })),
      })),
    };
    const pairsOf = (input: typeof plain): number => {
      const panel = buildLinePanel(input);
      return chooseSpecification(panel, [], buildRollingFrame(panel)).averaged[0]!.specification.fourierPairs;
    };
    expect(pairsOf(seasonal)).toBeGreaterThan(0);
    expect(pairsOf(plain)).toBe(0);
  });

  it('doesn’t look at the coming weeks of the plan when it chooses', () => {
    const input = generateLine({ items: 3, weeks: 90 });
    const other = {
      ...input,
      series: input.series.map((series) => ({
        ...series,
        planned: series.planned.map((week) => ({ ...week, price: 1.5, feature: 1 })),
      })),
    };
    expect(forecastLine(other).fit!.specification).toEqual(forecastLine(input).fit!.specification);
  });

  it('has no rolling origins where the history is too short for two', () => {
    expect(buildRollingFrame(buildLinePanel(generateLine({ weeks: 30 }))).origins).toEqual([]);
  });
});

describe('stated ranges of the effects', () => {
  it('hold the true price slope and lift about as often as they say', () => {
    // 60 lines from a generator with known effects: a true 95 % range misses more than 8 of 60 with probability below 0.1 %.
    let misses = 0;
    let stated = 0;
    for (let seed = 1; seed <= 30; seed++) {
      const { fit } = forecastLine(generateLine({ items: 4, weeks: 80, seed, noise: 0.3 }));
      for (const { name, low95, high95 } of fit!.coefficients) {
        const truth = { 'price paid': -2, feature: 0.5 }[name];
        if (truth === undefined) continue;
        stated++;
        if (truth < low95 || truth > high95) misses++;
      }
    }
    expect(stated).toBe(60);
    expect(misses).toBeLessThanOrEqual(8);
  }, 120_000);
});

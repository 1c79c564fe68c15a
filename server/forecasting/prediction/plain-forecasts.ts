import type { LinePanel } from '../features/line-panel.ts';
import { smoothIntermittent } from '../fit/intermittent.ts';
import { averageRecentWeeks } from '../fit/simple-average.ts';
import { createNormal, createRandom } from '../ranges/random.ts';

/** Forecast without a regression: one mean for every week, and paths × horizon units. */
export interface PlainForecast {
  mean: number;
  paths: Float64Array;
}

/** Mean of the last weeks with lognormal paths about it; for series too thin to fit. */
export function forecastSimpleAverage(panel: LinePanel, s: number, paths: number, seed: number): PlainForecast {
  const { mean, spread } = averageRecentWeeks(panel, panel.series[s]!);
  const drawNormal = createNormal(createRandom(seed + 101 * (s + 1)));
  const values = new Float64Array(paths * panel.horizon).map(() =>
    Math.max(0, mean * Math.exp(spread * drawNormal() - (spread * spread) / 2)),
  );
  return { mean, paths: values };
}

/** Teunter–Syntetos–Babai: probability × size, with paths that sell or don't and draw their size from the sizes seen. */
export function forecastIntermittent(panel: LinePanel, s: number, paths: number, seed: number): PlainForecast {
  const { probability, size, sizes } = smoothIntermittent(panel, panel.series[s]!);
  const random = createRandom(seed + 101 * (s + 1));
  const average = sizes.reduce((sum, value) => sum + value, 0) / Math.max(1, sizes.length);
  const values = new Float64Array(paths * panel.horizon).map(() =>
    random() < probability ? (sizes[Math.floor(random() * sizes.length)]! * size) / average : 0,
  );
  return { mean: probability * size, paths: values };
}

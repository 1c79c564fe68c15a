import type { LinePanel } from '../features/line-panel.ts';
import type { FitTarget } from './line-estimate.ts';

/** ln units of whole weeks, with weights that halve every `halfLifeWeeks` weeks back from the origin. */
export function buildLogTarget(panel: LinePanel, halfLifeWeeks: number): FitTarget {
  const length = panel.weeks.length;
  const fade = Float64Array.from({ length }, (_, t) =>
    Number.isFinite(halfLifeWeeks) ? 0.5 ** ((panel.pastWeeks - 1 - t) / halfLifeWeeks) : 1,
  );
  return {
    target: panel.series.map((series) =>
      series.units.map((units, t) => (units > 0 ? Math.log(units) - series.offset[t]! : 0)),
    ),
    rowWeights: panel.series.map((series) =>
      fade.map((weight, t) => (series.units[t]! > 0 ? weight * series.trust[t]! : 0)),
    ),
  };
}

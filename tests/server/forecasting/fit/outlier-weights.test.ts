import { describe, expect, it } from 'vitest';
import { buildLinePanel } from '../../../../server/forecasting/features/line-panel.ts';
import { buildColumnSet, fitLineModel } from '../../../../server/forecasting/fit/line-model.ts';
import { weighOutliers } from '../../../../server/forecasting/fit/outlier-weights.ts';
import { forecastLine } from '../../../../server/forecasting/forecast-line.ts';
import { startingSpecification } from '../../../../server/forecasting/search/choose-specification.ts';
import type { LineInput } from '../../../../server/forecasting/types.ts';
import { generateLine } from '../canonical-line.ts';

function multiplyWeek(input: LineInput, isChosen: (feature: number, price: number) => boolean, by: number): LineInput {
  const [first, ...others] = input.series;
  const at = first!.sold.findIndex((week, t) => t > 40 && isChosen(week.feature, week.price));
  const sold = first!.sold.map((week, t) => (t === at ? { ...week, units: week.units * by } : week));
  return { ...input, series: [{ ...first!, sold }, ...others] };
}

describe('outliers', () => {
  it('hardly move the forecast when an ordinary week is a thousand times too large, and are named', () => {
    const clean = generateLine({ items: 3 });
    const spoilt = multiplyWeek(clean, (feature, price) => feature === 0 && price === 2, 1000);
    const forecast = forecastLine(spoilt);
    expect(forecast.findings).toContainEqual(
      expect.objectContaining({ kind: 'outlier-week-weighed-less', item: 'item-0' }),
    );
    const reference = forecastLine(clean);
    forecast.series.forEach((series, s) => {
      for (let h = 0; h < 8; h++)
        expect(Math.abs(series.mean[h]! / reference.series[s]!.mean[h]! - 1)).toBeLessThan(0.1);
    });
  });

  it('keep their whole weight where they are promotion peaks', () => {
    const peak = multiplyWeek(generateLine({ items: 3 }), (feature) => feature > 0, 6);
    const panel = buildLinePanel(peak);
    const specification = { ...startingSpecification, attraction: false, neighbourPrice: false };
    const model = fitLineModel(panel, buildColumnSet(panel, [], specification), specification, panel.pastWeeks - 1);
    const weights = weighOutliers(panel, model);
    panel.series.forEach((series, s) => {
      for (let t = 0; t < panel.pastWeeks; t++) {
        expect(weights[s]![t]).toBeGreaterThan(0);
        expect(weights[s]![t]).toBeLessThanOrEqual(1);
      }
      const best = series.units.indexOf(Math.max(...series.units));
      expect(weights[s]![best]).toBe(1);
    });
  });
});

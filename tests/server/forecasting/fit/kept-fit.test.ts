import { describe, expect, it } from 'vitest';
import { buildLinePanel, type LinePanel } from '../../../../server/forecasting/features/line-panel.ts';
import { buildOwnColumns } from '../../../../server/forecasting/features/own-columns.ts';
import { dropUnusableColumns } from '../../../../server/forecasting/features/drop-columns.ts';
import { keepFit } from '../../../../server/forecasting/fit/kept-fit.ts';
import { estimateLine, linearPart } from '../../../../server/forecasting/fit/line-estimate.ts';
import { buildLogTarget } from '../../../../server/forecasting/fit/log-target.ts';
import { generateLine } from '../canonical-line.ts';

function fitOf(seed: number): {
  panel: LinePanel;
  columns: ReturnType<typeof buildOwnColumns>;
  target: ReturnType<typeof buildLogTarget>;
  estimate: ReturnType<typeof estimateLine>;
} {
  const panel = buildLinePanel(generateLine({ items: 3, locations: 2, weeks: 60, seed, missing: 0.1 }));
  const columns = dropUnusableColumns(panel, buildOwnColumns(panel, false, true)).kept;
  const target = buildLogTarget(panel, 52);
  return { panel, columns, target, estimate: estimateLine(panel, columns, target, panel.pastWeeks - 1, 1) };
}

describe('the kept fit', () => {
  it('agrees with the kernel of the search on lines of every kind', () => {
    for (let seed = 1; seed <= 12; seed++) {
      const { panel, target, estimate } = fitOf(seed);
      const kept = keepFit(panel, estimate, target, panel.pastWeeks - 1);
      estimate.slopes.forEach((slopes, s) => {
        slopes.forEach((slope, k) => expect(kept.slopes[s]![k]).toBeCloseTo(slope, 7));
        expect(kept.levels[s]).toBeCloseTo(estimate.levels[s]!, 7);
      });
    }
  });

  it('has leave-one-out residuals equal to those of fits without the row', () => {
    const { panel, columns, target, estimate } = fitOf(3);
    const lastWeek = panel.pastWeeks - 1;
    const kept = keepFit(panel, estimate, target, lastWeek);
    for (const i of [0, 17, 60, 133, kept.rows.length - 1]) {
      const { series: s, week: t } = kept.rows[i]!;
      const without: LinePanel = {
        ...panel,
        series: panel.series.map((one, at) =>
          at === s ? { ...one, isUsed: one.isUsed.map((used, week) => (week === t ? 0 : used)) } : one,
        ),
      };
      const refit = estimateLine(without, columns, target, lastWeek, 1, estimate.noise);
      const left = target.target[s]![t]! - refit.levels[s]! - linearPart(columns, refit.slopes[s]!, s, t);
      expect(kept.leaveOneOut[i]).toBeCloseTo(left, 6);
    }
  });

  it('counts the absorbed intercepts in its leverages', () => {
    const { panel, target, estimate } = fitOf(5);
    const kept = keepFit(panel, estimate, target, panel.pastWeeks - 1);
    const sum = kept.leverages.reduce((total, leverage) => total + leverage, 0);
    expect(sum).toBeGreaterThan(panel.series.length);
    expect(sum).toBeLessThan(panel.series.length + kept.open.length);
  });
});

describe('signs known from theory', () => {
  it('replace a wrong-signed slope by the line’s, or by 0 where the line’s is wrong too', () => {
    const input = generateLine({ items: 4, elasticity: 1.5, featureLift: -1 });
    const panel = buildLinePanel(input);
    const columns = dropUnusableColumns(panel, buildOwnColumns(panel, false, false)).kept;
    const estimate = estimateLine(panel, columns, buildLogTarget(panel, Infinity), panel.pastWeeks - 1, 1);
    for (const slopes of estimate.slopes) {
      for (const slope of slopes) expect(slope).toBeCloseTo(0, 6);
    }
    expect(estimate.wrongSigns).toContainEqual({ column: 'price paid', item: null, location: null });
  });
});

import type { LinePanel } from '../features/line-panel.ts';
import type { KeptFit } from '../fit/kept-fit.ts';
import type { LineModel } from '../fit/line-model.ts';
import { diagnoseFit, type FitDiagnosis } from './diagnose-fit.ts';
import type { EffectMember, FittedRows } from './fitted-rows.ts';

/** Diagnoses the kept fit of a line. */
export function diagnoseLine(panel: LinePanel, model: LineModel, kept: KeptFit): FitDiagnosis {
  return diagnoseFit(gatherFittedRows(panel, model, kept));
}

function gatherFittedRows(panel: LinePanel, { estimate, target }: LineModel, kept: KeptFit): FittedRows {
  const { layout, penalties } = estimate;
  const count = layout.columns.length;
  const columnAt = new Map(kept.open.map((p, column) => [p, column]));
  const membersOf = (
    names: readonly string[],
    at: Int32Array,
    k: number,
    memberOf: (s: number) => number,
  ): EffectMember[] =>
    names.map((name, g) => {
      const slopes = panel.series.flatMap((_, s) =>
        memberOf(s) === g && !Number.isNaN(kept.levels[s]!) ? [kept.slopes[s]![k]!] : [],
      );
      return {
        name,
        column: columnAt.get(at[g * count + k]!) ?? null,
        slope: slopes.length > 0 ? slopes.reduce((sum, slope) => sum + slope, 0) / slopes.length : Number.NaN,
      };
    });
  return {
    design: kept.design,
    columns: kept.open.length,
    response: Float64Array.from(kept.rows, ({ series, week }) => target.target[series]![week]!),
    weights: kept.weights,
    residuals: kept.residuals,
    leverages: kept.leverages,
    series: Int32Array.from(kept.rows, ({ series }) => series),
    weeks: Int32Array.from(kept.rows, ({ week }) => week),
    weekStarts: panel.weeks,
    seriesOf: panel.series.map(({ input }) => ({ item: input.item, location: input.location })),
    effects: layout.columns.map((column, k) => ({
      name: column.name,
      group: column.group,
      column: columnAt.get(k) ?? null,
      estimate: kept.coefficients[k]!,
      items: membersOf(panel.items, layout.itemAt, k, (s) => panel.series[s]!.item),
      locations: membersOf(panel.locations, layout.locationAt, k, (s) => panel.series[s]!.location),
    })),
    penalties: Float64Array.from(kept.open, (p) => penalties[p]!),
    rank: kept.rank,
    kept: kept.kept,
    factorR: kept.factorR,
    isPseudoLikelihood: panel.hasZeros,
  };
}

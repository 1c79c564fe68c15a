import type { Column } from '../features/column.ts';
import { switchOffComingPromotions, type LinePanel } from '../features/line-panel.ts';
import { averageLinear, type ChosenSpecification } from '../search/choose-specification.ts';
import type { RolledCandidate } from '../search/roll-candidate.ts';
import { residualsOf } from '../search/roll-candidate.ts';
import type { HolidayWeek } from '../types.ts';
import type { KeptFit } from '../fit/kept-fit.ts';
import { prepareComingColumns } from './coming-columns.ts';
import { partNames, predictSeries, type PredictedSeries } from './predicted-parts.ts';

/** One averaged specification, its columns over the plan and over the plan without promotions. */
export interface EnsembleMember {
  candidate: RolledCandidate;
  planned: readonly Column[];
  unpromoted: readonly Column[];
  slopes: readonly Float64Array[];
  levels: Float64Array;
}

/** The chosen specifications ready to forecast; the first is the kept fit, estimated by the QR kernel. */
export function buildEnsemble(
  panel: LinePanel,
  holidays: readonly HolidayWeek[],
  chosen: Pick<ChosenSpecification, 'averaged'>,
  kept: KeptFit,
): EnsembleMember[] {
  const quiet = switchOffComingPromotions(panel);
  return chosen.averaged.map((candidate, m) => {
    const { specification, model } = candidate;
    return {
      candidate,
      planned: prepareComingColumns(panel, holidays, specification, model),
      unpromoted: prepareComingColumns(quiet, holidays, specification, model),
      slopes: m === 0 ? kept.slopes : model.estimate.slopes,
      levels: m === 0 ? kept.levels : model.estimate.levels,
    };
  });
}

/** Average of the members' ln forecasts of a series, part by part. */
export function predictByEnsemble(
  panel: LinePanel,
  members: readonly EnsembleMember[],
  s: number,
  plan: 'planned' | 'unpromoted',
  recentLevel: (h: number) => number,
): PredictedSeries {
  const each = members.map((member) =>
    predictSeries(
      panel,
      s,
      member[plan],
      member.slopes[s]!,
      member.levels[s]!,
      member.candidate.model.estimate.moments[s]!,
      recentLevel,
    ),
  );
  const parts = { ...each[0]!.parts };
  for (const name of partNames) parts[name] = averageLinear(each.map((one) => one.parts[name]));
  return { linear: averageLinear(each.map((one) => one.linear)), parts };
}

/**
 * Leave-one-out residuals of the averaged forecast per series and week: its residuals ÷ (1 − the kept fit's leverage). Under Poisson
 * ln of the bounded ratio units ÷ mean.
 */
export function leaveOneOutResiduals(
  panel: LinePanel,
  averaged: readonly RolledCandidate[],
  kept: KeptFit,
): Float64Array[] {
  const lastWeek = panel.pastWeeks - 1;
  const each = averaged.map((candidate) => residualsOf(panel, candidate.model, lastWeek));
  const residuals = panel.series.map((_, s) => averageLinear(each.map((one) => one[s]!)));
  kept.rows.forEach(({ series, week }, i) => {
    residuals[series]![week]! /= Math.max(0.2, 1 - kept.leverages[i]!);
  });
  return residuals;
}

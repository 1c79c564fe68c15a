import type { BasePartName, UpliftPartName, WhyNumber } from '../../../shared/contracts/plan.ts';
import {
  overridesByWeek,
  replayOverrides,
  scopeHolds,
  scopesMeet,
  type ReplayedOverride,
  type Scope,
} from '../../../shared/domain/override-arithmetic.ts';
import {
  computeLogarithmicMean,
  shareByLogarithmicMean,
} from '../../../shared/statistics/decomposition/logarithmic-mean.ts';

/** One series in one week of a run. Units; mean and base unrounded. */
export interface WhyCell {
  itemId: number;
  locationId: number;
  unitStep: number;
  model: number;
  mean: number;
  base: number;
  /** Natural-log parts of the median by factor name, as the forecast gives them. */
  logParts: Readonly<Record<string, number>>;
}

const shapingBase = ['price', 'season', 'holiday', 'trend', 'recent level'] as const satisfies BasePartName[];
const basePartNames = ['level', ...shapingBase] as const satisfies BasePartName[];
const besidePromotion = ['around', 'neighbours'] as const satisfies UpliftPartName[];
const upliftPartNames = ['promotion', ...besidePromotion] as const satisfies UpliftPartName[];

export type ModelParts = Pick<WhyNumber, 'base' | 'uplift' | 'rounding' | 'model'>;

/** Units by part of one series: the base's parts add up to the base, the uplift's to mean − base. */
export interface CellParts {
  base: Record<BasePartName, number>;
  uplift: Record<UpliftPartName, number>;
}

/**
 * Shares base and uplift of one series out over their factors by the logarithmic mean (LMDI-I, Ang 2004). The level is what the base is without its
 * other factors, so it holds the factor from median to mean of ordinary weeks; what promoted weeks have beyond that factor belongs to the
 * promotion. Where there is no base or no mean, as outside a listing, there are no factors: all is level and promotion.
 */
export function shareCell({ mean, base, logParts }: Pick<WhyCell, 'mean' | 'base' | 'logParts'>): CellParts {
  const parts: CellParts = {
    base: { level: base, price: 0, season: 0, holiday: 0, trend: 0, 'recent level': 0 },
    uplift: { promotion: mean - base, around: 0, neighbours: 0 },
  };
  if (base > 0) {
    const logFactors = shapingBase.map((name) => logParts[name] ?? 0);
    const level = Math.exp(Math.log(base) - sum(logFactors));
    const shares = shareByLogarithmicMean(level, base, logFactors);
    parts.base.level = level;
    shapingBase.forEach((name, index) => (parts.base[name] = shares[index]!));
  }
  if (base > 0 && mean > 0) {
    const beside = besidePromotion.map((name) => logParts[name] ?? 0);
    const [promotion, ...others] = shareByLogarithmicMean(base, mean, [Math.log(mean / base) - sum(beside), ...beside]);
    parts.uplift.promotion = promotion!;
    besidePromotion.forEach((name, index) => (parts.uplift[name] = others[index]!));
  }
  return parts;
}

/**
 * Parts of the model of one series or of a total: a total's units are the sums of its series' units. Its factors are the ones whose product takes
 * the summed level to the summed base, and the base to the mean: exp(units ÷ logarithmic mean of both ends), for one series its own factors.
 */
export function shareModel(cells: readonly WhyCell[]): ModelParts {
  const parts = cells.map(shareCell);
  const base = sum(cells.map((cell) => cell.base));
  const mean = sum(cells.map((cell) => cell.mean));
  const model = sumUnits(cells.map((cell) => cell.model));
  const unitsOfBase = (name: BasePartName): number => sum(parts.map((cell) => cell.base[name]));
  const unitsOfUplift = (name: UpliftPartName): number => sum(parts.map((cell) => cell.uplift[name]));
  const level = unitsOfBase('level');
  const factorBetween = (from: number, to: number, units: number): number | null => {
    const logarithmicMean = computeLogarithmicMean(to, from);
    return logarithmicMean > 0 ? Math.exp(units / logarithmicMean) : null;
  };
  return {
    base: {
      units: base,
      parts: basePartNames.map((name) => ({
        name,
        units: unitsOfBase(name),
        factor: name === 'level' ? null : factorBetween(level, base, unitsOfBase(name)),
      })),
    },
    uplift: {
      units: mean - base,
      factor: base > 0 ? mean / base : null,
      parts: upliftPartNames.map((name) => ({
        name,
        units: unitsOfUplift(name),
        factor: factorBetween(base, mean, unitsOfUplift(name)),
      })),
    },
    rounding: model - mean,
    model,
  };
}

/** More overrides than these of one number are told one by one; those before them as one. */
const mostSteps = 30;

/**
 * What each override of a week changes of a scope's number when they are replayed in their order; the changes add up to `replayed` − model. Cleared
 * overrides and those that can't touch the scope are left out. `cells`: all series of the line, since totals spread over all of them.
 */
export function replayBySteps(
  cells: readonly WhyCell[],
  weekStart: string,
  overrides: readonly ReplayedOverride[],
  scope: Scope,
): { steps: WhyNumber['overrides']['steps']; replayed: number } {
  const inOrder = overridesByWeek(overrides, weekStart, 1)[0]!;
  const series = cells.map(({ itemId, locationId, unitStep, model }) => ({
    itemId,
    locationId,
    unitStep,
    model: [model],
  }));
  const replayFirst = (count: number): number => {
    const { plan } = replayOverrides({
      series,
      planFirstWeek: weekStart,
      planWeeks: 1,
      lockedWeeks: [],
      lockedPlan: null,
      overrides: inOrder.slice(0, count),
    });
    return sumUnits(plan.flatMap((weeks, index) => (scopeHolds(scope, cells[index]!) ? weeks : [])));
  };
  const touching = inOrder.flatMap((override, index) => (scopesMeet(override.scope, scope) ? [index] : []));
  const folded = Math.max(0, touching.length - mostSteps);
  const groups = [
    ...(folded > 0 ? [touching.slice(0, folded)] : []),
    ...touching.slice(folded).map((index) => [index]),
  ];
  let replayed = replayFirst(0);
  const steps = groups.map((group) => {
    const before = replayed;
    replayed = replayFirst(group.at(-1) + 1);
    return { overrideIds: group.map((index) => inOrder[index]!.id), units: cleanUnits(replayed - before) };
  });
  return { steps, replayed };
}

function sum(values: readonly number[]): number {
  return values.reduce((total, value) => total + value, 0);
}

/** Sum of units planned in steps, without the binary tail of steps such as 0.1. */
export function sumUnits(values: readonly number[]): number {
  return cleanUnits(sum(values));
}

export function cleanUnits(units: number): number {
  return Math.round(units * 1e6) / 1e6 + 0;
}

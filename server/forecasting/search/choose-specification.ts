import type { LinePanel } from '../features/line-panel.ts';
import { countWeeksAwayFromMedian } from '../fit/slope-layout.ts';
import type { CarryRule } from '../fit/recent-level.ts';
import type { HolidayWeek } from '../types.ts';
import { carryForward, rollCandidate, scoreForecasts, type OwnFits, type RolledCandidate } from './roll-candidate.ts';
import type { RollingFrame } from './rolling-frame.ts';
import type { CandidateScore } from './score.ts';
import type { Specification } from './specification.ts';

/** Candidates within this share of the best CRPS are averaged with it, at most this many. */
const AVERAGED_WITHIN = 0.015;
const MOST_AVERAGED = 4;
/** What a specification has to earn: it must be better by this many standard errors of its gain over the origins. */
const STANDARD_ERRORS_TO_EARN = 1.5;
const WEEKS_IN_YEAR = 52;

export interface ScoredCandidate {
  candidate: RolledCandidate;
  score: CandidateScore;
}

export interface ChosenSpecification {
  /** The best first, then those averaged with it. */
  averaged: RolledCandidate[];
  /** All candidates, best first. */
  ranked: ScoredCandidate[];
  carry: CarryRule;
}

export const startingSpecification: Specification = {
  splitPrice: false,
  advertisedPrice: true,
  neighbourPrice: true,
  neighbourPromotion: false,
  attraction: true,
  around: false,
  freshCut: false,
  fourierPairs: 0,
  holidays: false,
  trend: false,
  halfLifeWeeks: 104,
  spread: 1,
};

export const startingCarry: CarryRule = { halfLifeWeeks: 6, priorWeeks: 8, decayPerWeek: 0.95 };

/** A change to the best specification so far. Changes that have to be earned must beat it by more than chance. */
interface Step {
  change: Partial<Specification>;
  isEarned: boolean;
  /** 1.5 unless the change is known to look better than it is. */
  standardErrors?: number;
}

/**
 * Chooses among specifications on rolling origins inside the training weeks by CRPS in units, walking from a plain one through
 * groups of changes and keeping what is better. Season, trend, dips and holidays must be better by more than 1.5 standard errors of
 * their gain over the origins, trend by more than 2: on one to two and a half years they mostly look better than they are.
 */
export function chooseSpecification(
  panel: LinePanel,
  holidays: readonly HolidayWeek[],
  frame: RollingFrame,
): ChosenSpecification {
  const ownFits: OwnFits = new Map();
  const scored = new Map<string, ScoredCandidate>();
  const evaluate = (specification: Specification): ScoredCandidate => {
    const key = JSON.stringify({ ...specification, halfLifeWeeks: String(specification.halfLifeWeeks) });
    const known = scored.get(key);
    if (known) return known;
    const candidate = rollCandidate(panel, holidays, frame, specification, ownFits);
    const result = { candidate, score: scoreWith(panel, frame, candidate, startingCarry) };
    scored.set(key, result);
    return result;
  };
  let best = evaluate(startingSpecification);
  for (const group of listSteps(panel, holidays, frame)) {
    let bestOfGroup = best;
    for (const { change, isEarned, standardErrors } of group) {
      const challenger = evaluate({ ...best.candidate.specification, ...change });
      const isBetter = isEarned
        ? hasEarned(challenger.score, best.score, standardErrors)
        : challenger.score.crps < bestOfGroup.score.crps;
      if (isBetter && challenger.score.crps < bestOfGroup.score.crps) bestOfGroup = challenger;
    }
    best = bestOfGroup;
  }
  const ranked = [...scored.values()].sort((a, b) => a.score.crps - b.score.crps || a.score.wape - b.score.wape);
  const others = ranked.filter(
    (one) =>
      one !== best &&
      one.score.crps <= best.score.crps * (1 + AVERAGED_WITHIN) &&
      isNoRicher(one.candidate.specification, best.candidate.specification),
  );
  const averaged = [best, ...others].slice(0, MOST_AVERAGED).map((one) => one.candidate);
  return { averaged, ranked, carry: chooseCarry(panel, frame, averaged) };
}

function scoreWith(panel: LinePanel, frame: RollingFrame, candidate: RolledCandidate, rule: CarryRule): CandidateScore {
  const { linear, residuals, model } = candidate;
  const carried = carryForward(panel, frame, linear, residuals, rule);
  return scoreForecasts(panel, frame, carried, model.estimate.noise.precision, residuals[0]!);
}

function listSteps(panel: LinePanel, holidays: readonly HolidayWeek[], frame: RollingFrame): Step[][] {
  const plain = (change: Partial<Specification>): Step => ({ change, isEarned: false });
  const earned = (change: Partial<Specification>): Step => ({ change, isEarned: true });
  const earliest = frame.origins.at(-1) + 1;
  const groups: Step[][] = [[plain({ advertisedPrice: false })]];
  if (hasRegularPriceMoved(panel)) groups.push([plain({ splitPrice: true })]);
  if (panel.series.length > panel.locations.length) {
    groups.push([
      plain({ neighbourPrice: false }),
      plain({ attraction: false }),
      plain({ neighbourPromotion: true }),
      plain({ neighbourPrice: false, attraction: false }),
      plain({ neighbourPrice: false, attraction: false, neighbourPromotion: true }),
    ]);
  }
  groups.push([Infinity, 52, 26].map((halfLifeWeeks) => earned({ halfLifeWeeks })));
  groups.push([0.5, 2].map((spread) => earned({ spread })));
  groups.push([earned({ around: true }), earned({ freshCut: true }), earned({ around: true, freshCut: true })]);
  if (holidays.length > 0) groups.push([earned({ holidays: true })]);
  if (earliest >= WEEKS_IN_YEAR) {
    const pairs = panel.pastWeeks >= 2 * WEEKS_IN_YEAR ? [1, 2, 3, 4] : [1, 2, 3];
    groups.push(pairs.map((fourierPairs) => earned({ fourierPairs })));
  }
  if (earliest >= 40) groups.push([{ change: { trend: true }, isEarned: true, standardErrors: 2 }]);
  return groups;
}

/** Whether any series' regular price moved in at least four weeks; else the price paid and the cut are one and the same. */
function hasRegularPriceMoved(panel: LinePanel): boolean {
  return panel.series.some(
    (series) => countWeeksAwayFromMedian(series.lnRegular, series.isUsed, panel.pastWeeks - 1) >= 4,
  );
}

/** Whether the gain in CRPS is larger than its standard error over the origins allows for chance. */
export function hasEarned(
  challenger: CandidateScore,
  best: CandidateScore,
  standardErrors = STANDARD_ERRORS_TO_EARN,
): boolean {
  const gains = best.byOrigin.map((value, o) => value - challenger.byOrigin[o]!);
  const mean = gains.reduce((sum, gain) => sum + gain, 0) / gains.length;
  const variance = gains.reduce((sum, gain) => sum + (gain - mean) ** 2, 0) / Math.max(1, gains.length - 1);
  return mean > standardErrors * Math.sqrt(variance / gains.length);
}

/** Whether a specification brings in nothing that had to be earned and that the best one lacks. */
function isNoRicher(one: Specification, best: Specification): boolean {
  return (
    (!one.trend || best.trend) &&
    (!one.around || best.around) &&
    (!one.freshCut || best.freshCut) &&
    (!one.holidays || best.holidays) &&
    one.fourierPairs <= best.fourierPairs
  );
}

/** Mean over candidates of what they give per cell, or per week: an average on the log scale, so still a product of factors. */
export function averageLinear(arrays: readonly Float64Array[]): Float64Array {
  return arrays[0]!.map((_, i) => arrays.reduce((sum, values) => sum + values[i]!, 0) / arrays.length);
}

export function averageResiduals(candidates: readonly RolledCandidate[]): Float64Array[][] {
  return candidates[0]!.residuals.map((bySeries, o) =>
    bySeries.map((_, s) => averageLinear(candidates.map((candidate) => candidate.residuals[o]![s]!))),
  );
}

function chooseCarry(panel: LinePanel, frame: RollingFrame, averaged: readonly RolledCandidate[]): CarryRule {
  const linear = averageLinear(averaged.map((candidate) => candidate.linear));
  const residuals = averageResiduals(averaged);
  const { precision } = averaged[0]!.model.estimate.noise;
  const scoreOf = (rule: CarryRule): CandidateScore =>
    scoreForecasts(panel, frame, carryForward(panel, frame, linear, residuals, rule), precision, residuals[0]!);
  let best = startingCarry;
  const start = scoreOf(startingCarry);
  let bestScore = start.crps;
  for (const halfLifeWeeks of [4, 8, 16]) {
    for (const priorWeeks of [4, 8, 16, 64]) {
      for (const decayPerWeek of [0.85, 0.95, 1]) {
        const rule = { halfLifeWeeks, priorWeeks, decayPerWeek };
        const score = scoreOf(rule);
        if (score.crps < bestScore && hasEarned(score, start)) {
          best = rule;
          bestScore = score.crps;
        }
      }
    }
  }
  return best;
}

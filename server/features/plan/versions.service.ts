import type { VersionList, VersionState } from '../../../shared/contracts/plan.ts';
import { scopeKey } from '../../../shared/domain/override-arithmetic.ts';
import { addWeeks, weeksBetween } from '../../../shared/domain/weeks.ts';
import type { Actor } from '../../lib/authorise.ts';
import { inTransaction, type Database, type Tx } from '../../lib/database.ts';
import { ProblemError } from '../../lib/problem.ts';
import { demandLine } from './plan-access.ts';
import { replayState, type Window } from './plan-state.ts';
import * as repository from './plan.repository.ts';
import type { ChainLink } from './plan.repository.ts';

export function listVersions(database: Database, actor: Actor, lineId: number): Promise<VersionList> {
  return inTransaction(database, async (tx) => {
    await demandLine(tx, actor, lineId);
    return { versions: await repository.listVersions(tx, lineId) };
  });
}

export function readVersion(database: Database, actor: Actor, lineId: number, number: number): Promise<VersionState> {
  return inTransaction(database, async (tx) => {
    await demandLine(tx, actor, lineId);
    const version = (await repository.listVersions(tx, lineId)).find((candidate) => candidate.number === number);
    if (!version) throw new ProblemError('not-found', `The line has no version ${number}.`);
    const { window, series } = await rebuildVersion(tx, lineId, number);
    return { version, planFirstWeek: window.firstWeek, planWeeks: window.weeks, series };
  });
}

export interface RebuiltVersion {
  window: Window;
  /** By item and location. */
  series: { itemId: number; locationId: number; plan: number[] }[];
}

/**
 * A version as it was shown when it was saved: its overrides and all earlier ones replayed on the model of its run. Weeks that it held locked take
 * their numbers from the last version before in which they were open, or from a snapshot on the way to it. The version must exist.
 */
export async function rebuildVersion(tx: Tx, lineId: number, number: number): Promise<RebuiltVersion> {
  const chain = await repository.listChain(tx, lineId, number);
  const link = chain.at(-1);
  if (link?.number !== number) throw new Error(`line ${lineId} has no version ${number}`);
  const overrides = await repository.listOverrides(tx, [lineId], null);
  const known = new Map<number, Promise<RebuiltVersion>>();
  const openState = (of: ChainLink): Promise<RebuiltVersion> => {
    const state = known.get(of.id) ?? (of.hasSnapshot ? readSnapshot(of) : replayLink(of, []));
    known.set(of.id, state);
    return state;
  };

  async function readSnapshot(of: ChainLink): Promise<RebuiltVersion> {
    return { window: of, series: await repository.listSnapshot(tx, of.id) };
  }

  async function replayLink(
    of: ChainLink,
    held: readonly { week: string; from: ChainLink }[],
  ): Promise<RebuiltVersion> {
    const series = await repository.listRunModels(tx, lineId, of.runId);
    const lockedPlan = series.map(() => new Array<number>(of.weeks).fill(0));
    for (const { week, from } of held) {
      const source = await openState(from);
      const values = new Map(
        source.series.map((one) => [scopeKey(one), one.plan[weeksBetween(source.window.firstWeek, week)] ?? 0]),
      );
      const position = weeksBetween(of.firstWeek, week);
      series.forEach((one, index) => (lockedPlan[index]![position] = values.get(scopeKey(one)) ?? 0));
    }
    const { plan } = replayState({
      window: of,
      series,
      overrides: overrides.filter(({ version }) => version <= of.number),
      lockedWeeks: held.map(({ week }) => week),
      lockedPlan,
    });
    return {
      window: { firstWeek: of.firstWeek, weeks: of.weeks },
      series: series.map(({ itemId, locationId }, index) => ({ itemId, locationId, plan: plan[index]! })),
    };
  }

  if (link.hasSnapshot) return openState(link);
  const end = addWeeks(link.firstWeek, link.weeks);
  const held = link.heldWeeks
    .filter((week) => week >= link.firstWeek && week < end)
    .map((week) => {
      const from = chain.findLast(
        (earlier) => earlier !== link && (earlier.hasSnapshot || !earlier.heldWeeks.includes(week)),
      );
      if (!from) throw new Error(`week ${week} of line ${lineId} was locked before it had a number`);
      return { week, from };
    });
  return replayLink(link, held);
}

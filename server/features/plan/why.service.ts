import type { LastPromotion, WhyNumber } from '../../../shared/contracts/plan.ts';
import { scopeHolds, type Scope } from '../../../shared/domain/override-arithmetic.ts';
import { addWeeks, listWeeks, weekLabel } from '../../../shared/domain/weeks.ts';
import type { Actor } from '../../lib/authorise.ts';
import { inTransaction, type Database, type Tx } from '../../lib/database.ts';
import { ProblemError } from '../../lib/problem.ts';
import { loadPromotions } from '../calendar/calendar.service.ts';
import { itemSalesByWeek, salesTotalsByWeek } from '../sales/sales.service.ts';
import { findLastSimilarPromotion } from './last-promotion.ts';
import { demandLine, demandPlanned } from './plan-access.ts';
import * as repository from './plan.repository.ts';
import { cleanUnits, replayBySteps, shareModel, sumUnits } from './why-parts.ts';

const weeksOfYear = 52;

/**
 * One number of a line's newest plan in parts that add up. Throws `not-found` for a line out of the person's sight and for a scope without a
 * series, `no-forecast` before the first one, `invalid-request` for a week that isn't planned.
 */
export function readWhy(
  database: Database,
  actor: Actor,
  lineId: number,
  { scope, weekStart }: { scope: Scope; weekStart: string },
): Promise<WhyNumber> {
  return inTransaction(database, async (tx) => {
    const { line, version, run } = demandPlanned(await demandLine(tx, actor, lineId));
    const position = listWeeks(run.firstWeek, run.weeks).indexOf(weekStart);
    if (position < 0) {
      const last = addWeeks(run.firstWeek, run.weeks - 1);
      throw new ProblemError('invalid-request', 'Ask for a week of the plan.', {
        errors: [
          {
            pointer: '/week',
            detail: `${line.name} is planned from ${weekLabel(run.firstWeek)} to ${weekLabel(last)}`,
          },
        ],
      });
    }
    const all = await repository.listWhyCells(tx, lineId, run.id, position + 1);
    const cells = all.filter((cell) => scopeHolds(scope, cell));
    if (cells.length === 0) {
      throw new ProblemError('not-found', `${line.name} has no such item or location in its plan. Reload the page.`);
    }
    const parts = shareModel(cells);
    const overrides = (await repository.listOverrides(tx, [lineId], weekStart)).filter(
      ({ firstWeek }) => firstWeek <= weekStart,
    );
    const { steps, replayed } = replayBySteps(all, weekStart, overrides, scope);
    const plan = sumUnits(cells.map((cell) => cell.plan ?? cell.model));
    return {
      scope,
      weekStart,
      version: version.number,
      series: cells.length,
      ...parts,
      overrides: { units: cleanUnits(replayed - parts.model), steps },
      held: cleanUnits(plan - replayed),
      plan,
      lastYear: await findLastYear(tx, lineId, scope, weekStart),
      lastPromotion: await findLastPromotion(tx, lineId, scope, cells, { weekStart, seam: run.firstWeek }),
    };
  });
}

async function findLastYear(
  tx: Tx,
  lineId: number,
  scope: Scope,
  weekStart: string,
): Promise<{ weekStart: string; units: number | null }> {
  const earlier = addWeeks(weekStart, -weeksOfYear);
  const sold = (await salesTotalsByWeek(tx, [lineId], earlier, 1))
    .filter((series) => scopeHolds(scope, series))
    .flatMap(({ units }) => units[0] ?? []);
  return { weekStart: earlier, units: sold.length === 0 ? null : sumUnits(sold) };
}

/** Only for one item: what a promotion did to several can't be told by like terms. */
async function findLastPromotion(
  tx: Tx,
  lineId: number,
  { itemId }: Scope,
  cells: readonly { locationId: number }[],
  { weekStart, seam }: { weekStart: string; seam: string },
): Promise<LastPromotion | null> {
  if (itemId === null) return null;
  const locationIds = cells.map(({ locationId }) => locationId);
  const planned = await loadPromotions(tx, [itemId], locationIds, weekStart, 1);
  const [terms] = planned.sort((a, b) => b.locationIds.length - a.locationIds.length);
  if (!terms) return null;
  return findLastSimilarPromotion(await itemSalesByWeek(tx, lineId, itemId, locationIds, seam), terms);
}

import type { WaitingEntry, WaitingList } from '../../../shared/contracts/waiting.ts';
import { hasRight, scopeOf, type Actor } from '../../lib/authorise.ts';
import { inTransaction, type Database, type Tx } from '../../lib/database.ts';
import { waitingPlanEntries } from '../plan/plan-waiting.service.ts';
import * as repository from './waiting.repository.ts';

/** What comes first where no money is known: what others wait for, then one's own chores. */
const urgency: Readonly<Record<WaitingEntry['kind'], number>> = {
  'override-needs-decision': 1,
  'line-to-review': 2,
  'line-returned': 2,
  'import-to-check': 3,
  'forecast-behind-sales': 3,
  'no-forecast-yet': 3,
  'pack-to-build': 3,
  'override-due-another-look': 4,
  'line-to-submit': 4,
  'pack-ready': 5,
  'no-sales-yet': 5,
  'set-up-category': 2,
  'set-up-people': 2,
};

/** Everything that waits for the person, most urgent first, then by the money at stake. */
export function listWaiting(database: Database, actor: Actor): Promise<WaitingList> {
  return inTransaction(database, async (tx) => {
    const entries = [
      ...(await listSetUp(tx, actor)),
      ...(await listImports(tx, actor)),
      ...(await waitingPlanEntries(tx, actor)),
      ...(await listPacks(tx, actor)),
    ];
    return {
      entries: entries.sort((a, b) => urgency[a.kind] - urgency[b.kind] || (b.stake ?? 0) - (a.stake ?? 0)),
    };
  });
}

function entryOf(entry: Pick<WaitingEntry, 'kind' | 'subject' | 'link'> & Partial<WaitingEntry>): WaitingEntry {
  return { categoryId: null, categoryName: null, detail: null, count: 1, stake: null, at: null, ...entry };
}

async function listSetUp(tx: Tx, actor: Actor): Promise<WaitingEntry[]> {
  const entries: WaitingEntry[] = [];
  const isAdministrator = hasRight(actor, 'administer', null);
  const categories = await repository.listCategoryStates(tx, scopeOf(actor, 'see-category'));
  if (isAdministrator && categories.length === 0) {
    entries.push(entryOf({ kind: 'set-up-category', subject: '', link: '/settings/range' }));
  }
  for (const category of categories) {
    const own = { categoryId: category.id, categoryName: category.name, subject: category.name };
    if (isAdministrator && category.people === 0) {
      entries.push(entryOf({ kind: 'set-up-people', ...own, link: '/settings/people' }));
    }
    if (category.lastSalesWeek === null && hasRight(actor, 'import-sales', category.id)) {
      entries.push(entryOf({ kind: 'no-sales-yet', ...own, link: `/sales?category=${category.id}` }));
    }
  }
  return entries;
}

async function listImports(tx: Tx, actor: Actor): Promise<WaitingEntry[]> {
  const imports = await repository.listImportsToCheck(tx, actor.id);
  return imports.map(({ id, fileName, at, rowsRefused }) =>
    entryOf({
      kind: 'import-to-check',
      subject: fileName,
      count: rowsRefused ?? 0,
      at: at.toISOString(),
      link: `/sales/imports/${id}`,
    }),
  );
}

async function listPacks(tx: Tx, actor: Actor): Promise<WaitingEntry[]> {
  const toBuild = await repository.listLocksWithoutPack(tx, scopeOf(actor, 'build-pack'));
  const ready = await repository.listNewPacks(tx, scopeOf(actor, 'download-pack'), actor.id);
  return [
    ...toBuild.map((pack) =>
      entryOf({
        kind: 'pack-to-build',
        categoryId: pack.categoryId,
        categoryName: pack.categoryName,
        subject: pack.categoryName,
        count: pack.lines,
        at: pack.lockedAt.toISOString(),
        link: `/packs?category=${pack.categoryId}`,
      }),
    ),
    ...ready.map((pack) =>
      entryOf({
        kind: 'pack-ready',
        categoryId: pack.categoryId,
        categoryName: pack.categoryName,
        subject: pack.categoryName,
        detail: String(pack.number),
        stake: pack.netValue,
        at: pack.at.toISOString(),
        link: `/packs?category=${pack.categoryId}`,
      }),
    ),
  ];
}

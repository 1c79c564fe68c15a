import { LineFitView, type CategoryList, type Category } from '../../../shared/contracts/lines.ts';
import type { Named } from '../../../shared/contracts/primitives.ts';
import { writeAudit } from '../../lib/audit.ts';
import { demandRight, scopeOf, type Actor } from '../../lib/authorise.ts';
import { inTransaction, type Database } from '../../lib/database.ts';
import { ProblemError } from '../../lib/problem.ts';
import { findActiveJob } from '../jobs/jobs.service.ts';
import { loadSettings } from '../settings/settings.service.ts';
import * as repository from './lines.repository.ts';

export function listCategories(database: Database, actor: Actor): Promise<CategoryList> {
  return inTransaction(database, async (tx) => ({
    categories: await repository.listCategories(tx, scopeOf(actor, 'see-category')),
    firstWeekday: (await loadSettings(tx)).firstWeekday,
  }));
}

export function createCategory(database: Database, actor: Actor, name: string): Promise<Category> {
  demandRight(actor, 'administer', null);
  return inTransaction(database, async (tx) => {
    const id = await repository.insertCategory(tx, name);
    if (id === null) throw new ProblemError('already-exists', 'There is a category of this name. Choose another name.');
    await writeAudit(tx, {
      actor,
      action: 'create-category',
      subject: `category:${id}`,
      categoryId: id,
      new: { name },
    });
    return { id, name, lines: [], lastSalesWeek: null };
  });
}

export function createLine(
  database: Database,
  actor: Actor,
  line: { categoryId: number; name: string },
): Promise<Named> {
  demandRight(actor, 'create-range', line.categoryId);
  return inTransaction(database, async (tx) => {
    const known = await repository.listCategories(tx, [line.categoryId]);
    if (known.length === 0) throw new ProblemError('not-found', 'There is no such category.');
    const id = await repository.insertLine(tx, line.categoryId, line.name);
    if (id === null)
      throw new ProblemError('already-exists', 'The category has a line of this name. Choose another name.');
    await writeAudit(tx, {
      actor,
      action: 'create-line',
      subject: `line:${id}`,
      categoryId: line.categoryId,
      new: { name: line.name },
    });
    return { id, name: line.name };
  });
}

export function readLineFit(database: Database, actor: Actor, lineId: number): Promise<LineFitView> {
  return inTransaction(database, async (tx) => {
    const found = await repository.findLine(tx, lineId);
    if (!found) throw new ProblemError('not-found', 'There is no such line, or you have no access to its category.');
    demandRight(actor, 'see-category', found.category.id);
    return LineFitView.parse({
      ...found,
      fit: await repository.findNewestFit(tx, lineId),
      names: await repository.findNames(tx, lineId),
      activeJob: await findActiveJob(tx, `category:${found.category.id}`),
    });
  });
}

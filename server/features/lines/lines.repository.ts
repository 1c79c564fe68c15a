import type { Category, LineFitView } from '../../../shared/contracts/lines.ts';
import type { Named } from '../../../shared/contracts/primitives.ts';
import { selectRow, selectRows, type Tx } from '../../lib/database.ts';

/** Categories in scope with their lines and last sales week. */
export function listCategories(tx: Tx, categories: number[] | null): Promise<Category[]> {
  return selectRows<Category>(
    tx,
    `select c.id, c.name,
            coalesce((select json_agg(json_build_object('id', l.id, 'name', l.name) order by lower(l.name)) from product_line l where l.category_id = c.id), '[]') as lines,
            (select max(w.week_start)::text from product_line l join item_membership m on m.line_id = l.id join sales_week w on w.item_id = m.item_id
             where l.category_id = c.id and w.week_start >= m.valid_from and (m.valid_to is null or w.week_start < m.valid_to)) as "lastSalesWeek"
     from category c
     where $categories::int[] is null or c.id = any($categories::int[])
     order by lower(c.name)`,
    { categories },
  );
}

export async function insertCategory(tx: Tx, name: string): Promise<number | null> {
  const row = await selectRow<{ id: number }>(
    tx,
    'insert into category (name) values ($name) on conflict do nothing returning id',
    {
      name,
    },
  );
  return row?.id ?? null;
}

export async function insertLine(tx: Tx, categoryId: number, name: string): Promise<number | null> {
  const row = await selectRow<{ id: number }>(
    tx,
    'insert into product_line (category_id, name) values ($categoryId, $name) on conflict do nothing returning id',
    { categoryId, name },
  );
  return row?.id ?? null;
}

export function findLine(tx: Tx, id: number): Promise<{ line: Named; category: Named } | null> {
  return selectRow(
    tx,
    `select json_build_object('id', l.id, 'name', l.name) as line, json_build_object('id', c.id, 'name', c.name) as category
     from product_line l join category c on c.id = l.category_id where l.id = $id`,
    { id },
  );
}

/** Names by code of a line's items, past ones included, and of the locations where they are forecast. */
export async function findNames(tx: Tx, lineId: number): Promise<LineFitView['names']> {
  const row = await selectRow<LineFitView['names']>(
    tx,
    `select coalesce((select jsonb_object_agg(i.code, i.name) from item i
                      where i.id in (select m.item_id from item_membership m where m.line_id = $lineId)), '{}') as items,
            coalesce((select jsonb_object_agg(l.code, l.name) from location l
                      where l.id in (select t.location_id from run_series t
                                     where t.line_id = $lineId
                                       and t.run_id = (select max(run_id) from fit where line_id = $lineId))), '{}') as locations`,
    { lineId },
  );
  return row ?? { items: {}, locations: {} };
}

/** The newest fit of a line, as the line page shows it. */
export async function findNewestFit(tx: Tx, lineId: number): Promise<LineFitView['fit']> {
  const row = await selectRow<{ fit: LineFitView['fit'] }>(
    tx,
    `select json_build_object('id', f.id, 'at', f.at, 'salesTo', r.sales_to, 'specification', f.specification, 'coefficients', f.coefficients,
                              'scores', f.scores, 'findings', f.findings, 'diagnosis', f.diagnosis)::jsonb || f.summary as fit
     from fit f join forecast_run r on r.id = f.run_id where f.line_id = $lineId order by f.id desc limit 1`,
    { lineId },
  );
  return row?.fit ?? null;
}

import { selectRows, type Tx } from '../../lib/database.ts';

export interface ImportWaiting {
  id: number;
  fileName: string;
  at: Date;
  rowsRefused: number | null;
}

/** The person's own imports that were read and wait for a yes. */
export function listImportsToCheck(tx: Tx, personId: number): Promise<ImportWaiting[]> {
  return selectRows<ImportWaiting>(
    tx,
    `select i.id, f.file_name as "fileName", i.created_at as at, (i.totals->>'rowsRefused')::int as "rowsRefused"
     from "import" i join stored_file f on f.id = i.file_id
     where i.actor_id = $personId and i.state = 'to-check' order by i.id desc`,
    { personId },
  );
}

export interface CategoryWaiting {
  id: number;
  name: string;
  lines: number;
  people: number;
  lastSalesWeek: string | null;
}

export function listCategoryStates(tx: Tx, categories: number[] | null): Promise<CategoryWaiting[]> {
  return selectRows<CategoryWaiting>(
    tx,
    `select c.id, c.name,
            (select count(*)::int from product_line l where l.category_id = c.id) as lines,
            (select count(distinct a.person_id)::int from category_assignment a
             where a.role in ('planner', 'category-lead') and (a.category_id = c.id or a.category_id is null)) as people,
            (select max(w.week_start)::text from product_line l join item_membership m on m.line_id = l.id join sales_week w on w.item_id = m.item_id
             where l.category_id = c.id) as "lastSalesWeek"
     from category c where $categories::int[] is null or c.id = any($categories::int[]) order by lower(c.name)`,
    { categories },
  );
}

export interface PackWaiting {
  categoryId: number;
  categoryName: string;
  lines: number;
  lockedAt: Date;
}

/** Categories where a line was locked after the newest pack was built. */
export function listLocksWithoutPack(tx: Tx, categories: number[] | null): Promise<PackWaiting[]> {
  return selectRows<PackWaiting>(
    tx,
    `select c.id as "categoryId", c.name as "categoryName", count(distinct k.line_id)::int as lines, max(k.at) as "lockedAt"
     from category c
     join product_line l on l.category_id = c.id
     join locked_week k on k.line_id = l.id
     where ($categories::int[] is null or c.id = any($categories::int[]))
       and k.at > coalesce((select max(p.at) from pack p where p.category_id = c.id), '-infinity')
     group by c.id, c.name order by max(k.at) desc`,
    { categories },
  );
}

export interface PackReady {
  id: number;
  number: number;
  categoryId: number;
  categoryName: string;
  at: Date;
  netValue: number | null;
}

/** Packs of the last week that somebody else built. */
export function listNewPacks(tx: Tx, categories: number[] | null, personId: number): Promise<PackReady[]> {
  return selectRows<PackReady>(
    tx,
    `select p.id, p.number, p.category_id as "categoryId", c.name as "categoryName", p.at, p.net_value as "netValue"
     from pack p join category c on c.id = p.category_id
     where ($categories::int[] is null or c.id = any($categories::int[])) and p.actor_id <> $personId and p.at > now() - interval '7 days'
     order by p.id desc limit 5`,
    { categories, personId },
  );
}

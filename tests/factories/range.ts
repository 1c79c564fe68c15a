import type { Database } from '../../server/lib/database.ts';

export interface MadeRange {
  categoryId: number;
  lineId: number;
  itemIds: number[];
  itemCodes: string[];
  locationIds: number[];
  locationCodes: string[];
}

let drawn = 0;

export async function makeCategory(database: Database, name?: string): Promise<number> {
  drawn += 1;
  return insertOne(database, 'insert into category (name) values ($1) returning id', [name ?? `Category ${drawn}`]);
}

export async function makeLine(database: Database, categoryId: number, name?: string): Promise<number> {
  drawn += 1;
  return insertOne(database, 'insert into product_line (category_id, name) values ($1, $2) returning id', [
    categoryId,
    name ?? `Line ${drawn}`,
  ]);
}

/** An item in a line, from long ago on. */
export async function makeItem(
  database: Database,
  lineId: number,
  given: { code?: string; name?: string; unitStep?: number } = {},
): Promise<number> {
  drawn += 1;
  const code = given.code ?? `I${String(drawn).padStart(3, '0')}`;
  const id = await insertOne(database, 'insert into item (code, name, unit_step) values ($1, $2, $3) returning id', [
    code,
    given.name ?? `Item ${code}`,
    given.unitStep ?? 1,
  ]);
  await database.pool.query(
    `insert into item_membership (item_id, line_id, valid_from) values ($1, $2, date '1900-01-01')`,
    [id, lineId],
  );
  return id;
}

export async function makeLocation(database: Database, code?: string): Promise<number> {
  drawn += 1;
  const known = code ?? `L${String(drawn).padStart(3, '0')}`;
  return insertOne(database, 'insert into location (code, name) values ($1, $1) returning id', [known]);
}

/** One category with one line, its items, and locations of its own. */
export async function makeRange(
  database: Database,
  {
    items = 2,
    locations = 1,
    category,
    line,
  }: { items?: number; locations?: number; category?: string; line?: string } = {},
): Promise<MadeRange> {
  const categoryId = await makeCategory(database, category);
  const lineId = await makeLine(database, categoryId, line);
  const itemIds: number[] = [];
  const locationIds: number[] = [];
  for (let count = 0; count < items; count += 1) itemIds.push(await makeItem(database, lineId));
  for (let count = 0; count < locations; count += 1) locationIds.push(await makeLocation(database));
  const codesOf = async (table: 'item' | 'location', ids: number[]) => {
    const { rows } = await database.pool.query<{ code: string }>(
      `select code from ${table} where id = any($1) order by id`,
      [ids],
    );
    return rows.map(({ code }) => code);
  };
  return {
    categoryId,
    lineId,
    itemIds,
    itemCodes: await codesOf('item', itemIds),
    locationIds,
    locationCodes: await codesOf('location', locationIds),
  };
}

async function insertOne(database: Database, sql: string, values: unknown[]): Promise<number> {
  const { rows } = await database.pool.query<{ id: number }>(sql, values);
  if (!rows[0]) throw new Error('nothing was inserted');
  return rows[0].id;
}

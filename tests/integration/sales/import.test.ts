import { readFileSync } from 'node:fs';
import pg from 'pg';
import request from 'supertest';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { Problem } from '../../../shared/contracts/problem.ts';
import { ImportDetail, ImportList } from '../../../shared/contracts/sales.ts';
import { buildApp } from '../../../server/app.ts';
import { openTestDeps, signIn, type TestDeps } from '../../factories/deps.ts';
import { buildImporter, importHandlers } from '../../factories/imports.ts';
import { runQueuedJobs } from '../../factories/jobs.ts';
import { makePerson } from '../../factories/people.ts';
import { makeCategory, makeItem, makeLine, makeRange } from '../../factories/range.ts';

let deps: TestDeps;
let app: ReturnType<typeof buildApp>;

beforeAll(async () => {
  deps = await openTestDeps();
  app = buildApp(deps);
  // A Monday, so that every file of this suite starts its weeks alike.
  await deps.database.pool.query(`update setting set value = '1' where name = 'firstWeekday'`);
});
afterAll(() => deps.close());

async function planIn(categoryId: number, { isDataSteward = false } = {}) {
  const person = await makePerson(deps.database, { assignments: [{ role: 'planner', categoryId }], isDataSteward });
  const cookie = await signIn(deps, person);
  return { person, cookie, importer: buildImporter(app, deps, cookie) };
}

function problemOf(response: request.Response): Problem {
  expect(response.headers['content-type']).toContain('application/problem+json');
  return Problem.parse(JSON.parse(response.text));
}

async function inForce(categoryId: number) {
  const { rows } = await deps.database.pool.query(
    `select i.code as item, l.code as location, w.week_start as week, w.units, w.net_value, w.price, w.regular_price, w.feature, w.gap, w.mechanics, w.days_open
     from sales_week w join item i on i.id = w.item_id join location l on l.id = w.location_id
     join item_membership m on m.item_id = i.id join product_line p on p.id = m.line_id
     where p.category_id = $1 order by 1, 2, 3`,
    [categoryId],
  );
  return rows as Record<string, unknown>[];
}

describe('a file in the canonical form', () => {
  it('is understood without a mapping, makes what it names after a yes, and puts its rows in force', async () => {
    const categoryId = await makeCategory(deps.database, 'Preserves');
    const { importer } = await planIn(categoryId);
    const read = await importer.upload(
      'sales-2026-W02.csv',
      [
        'week,category,line,item,item_name,location,units,net_value,price,regular_price,feature,display,promo_coupon,gap,days_open',
        '2026-01-05,Preserves,Jams,JAM1,Plum jam,North,12,24.00,2,2.5,1,0,0.5,0,6',
        '2026-W03,preserves,jams,jam1,Plum jam,north,10,25,2.5,2.5,0,0,0,0.25,',
        '2026-01-12,Preserves,Jelly,JEL1,Quince jelly,South,-1.5,,,,,,,,',
      ].join('\n'),
    );
    expect(read).toMatchObject({
      state: 'to-check',
      kind: 'sales',
      rowsTaken: 3,
      rowsRefused: 0,
      mayAccept: true,
      unknown: {
        categories: [],
        lines: [
          { category: 'Preserves', line: 'Jams' },
          { category: 'Preserves', line: 'Jelly' },
        ],
        items: [
          { item: 'JAM1', name: 'Plum jam', line: 'Jams' },
          { item: 'JEL1', name: 'Quince jelly', line: 'Jelly' },
        ],
        locations: ['North', 'South'],
      },
      totals: { rowsRead: 3, weeks: 2, items: 2, locations: 2, units: 20.5, netValue: 49, keysHeld: 0, keysChanged: 0 },
    });
    expect(read.totals?.byWeek).toEqual([
      { weekStart: '2026-01-05', units: 12, unitsHeld: null, rows: 1 },
      { weekStart: '2026-01-12', units: 8.5, unitsHeld: null, rows: 2 },
    ]);
    expect(await inForce(categoryId)).toEqual([]);

    expect((await importer.accept(read.id)).state).toBe('done');
    expect((await importer.read(read.id)).state).toBe('accepted');
    const nothing = {
      net_value: null,
      price: null,
      regular_price: null,
      feature: null,
      gap: null,
      mechanics: null,
      days_open: null,
    };
    expect(await inForce(categoryId)).toEqual([
      {
        item: 'JAM1',
        location: 'North',
        week: '2026-01-05',
        units: 12,
        net_value: 24,
        price: 2,
        regular_price: 2.5,
        feature: 1,
        gap: 0,
        mechanics: { coupon: 0.5 },
        days_open: 6,
      },
      {
        ...nothing,
        item: 'JAM1',
        location: 'North',
        week: '2026-01-12',
        units: 10,
        net_value: 25,
        price: 2.5,
        regular_price: 2.5,
        feature: 0,
        gap: 0.25,
        mechanics: { coupon: 0 },
      },
      { ...nothing, item: 'JEL1', location: 'South', week: '2026-01-12', units: -1.5 },
    ]);
    const made = await deps.database.pool.query(
      `select i.code, i.name, i.unit_step::float8 as step, p.name as line, m.valid_from
       from item i join item_membership m on m.item_id = i.id join product_line p on p.id = m.line_id where p.category_id = $1 order by 1`,
      [categoryId],
    );
    expect(made.rows).toEqual([
      { code: 'JAM1', name: 'Plum jam', step: 1, line: 'Jams', valid_from: '1900-01-01' },
      { code: 'JEL1', name: 'Quince jelly', step: 0.1, line: 'Jelly', valid_from: '1900-01-01' },
    ]);
    const audited = await deps.database.pool.query(
      `select action, category_id from audit_entry where subject = $1 order by id`,
      [`import:${read.id}`],
    );
    expect(audited.rows).toEqual([
      { action: 'import.receive', category_id: null },
      { action: 'import.accept', category_id: categoryId },
    ]);
  });

  it('says how it differs from what is held, and the newest accepted file wins', async () => {
    const { categoryId, itemCodes, locationCodes } = await makeRange(deps.database, { items: 1 });
    const { importer } = await planIn(categoryId);
    const [item, place] = [itemCodes[0], locationCodes[0]];
    const first = await importer.upload(
      'first.csv',
      `week,item,location,units\n2026-W02,${item},${place},5\n2026-W03,${item},${place},6`,
    );
    await importer.accept(first.id);
    const second = await importer.upload(
      'second.csv',
      `week,item,location,units\n2026-W03,${item},${place},6\n2026-W04,${item},${place},7\n2026-W02,${item},${place},4`,
    );
    expect(second.totals).toMatchObject({ rowsTaken: 3, keysHeld: 2, keysChanged: 1 });
    expect(second.totals?.byWeek.map(({ unitsHeld }) => unitsHeld)).toEqual([5, 6, null]);
    await importer.accept(second.id);
    expect((await inForce(categoryId)).map(({ units }) => units)).toEqual([4, 6, 7]);
    const list = await request(app)
      .get(`/api/imports?categoryId=${categoryId}`)
      .set(
        'cookie',
        await signIn(deps, await makePerson(deps.database, { assignments: [{ role: 'viewer', categoryId }] })),
      );
    expect(ImportList.parse(list.body)).toMatchObject({
      imports: [
        { id: second.id, state: 'accepted' },
        { id: first.id, state: 'accepted' },
      ],
      health: { firstWeek: '2026-01-05', lastWeek: '2026-01-19', items: 1, entriesInForce: 3, missingWeeks: 0 },
      mayImport: false,
    });
  });
});

describe('the public benchmark files', () => {
  it('go in without a mapping, each row of them, on weeks that begin on their own weekday', async () => {
    const own = await openTestDeps();
    try {
      const categoryId = await makeCategory(own.database, 'Juice');
      const planner = await makePerson(own.database, { assignments: [{ role: 'planner', categoryId }] });
      const importer = buildImporter(buildApp(own), own, await signIn(own, planner));
      for (const [name, rows] of [
        ['oj_chain.csv', 1331],
        ['oj_store10.csv', 13_002],
      ] as const) {
        const file = readFileSync(new URL(`../../reference/oj/benchmark/${name}`, import.meta.url));
        expect(file.toString('utf8').trimEnd().split('\n').length - 1).toBe(rows);
        const read = await importer.upload(name, file);
        expect(read).toMatchObject({ state: 'to-check', rowsTaken: rows, rowsRefused: 0, findings: [] });
        expect(read.mapping).toMatchObject({ categoryId, firstWeekday: 4 });
        expect((await importer.accept(read.id)).state).toBe('done');
      }
      const { rows } = await own.database.pool.query(
        `select count(*)::int as rows, sum(units) as units, (select value::int from setting where name = 'firstWeekday') as weekday from sales_week`,
      );
      const unitsOf = (name: string) =>
        readFileSync(new URL(`../../reference/oj/benchmark/${name}`, import.meta.url), 'utf8')
          .trimEnd()
          .split('\n')
          .slice(1)
          .reduce((sum, line) => sum + Number(line.split(',')[4]), 0);
      expect(rows).toEqual([
        { rows: 1331 + 13_002, units: unitsOf('oj_chain.csv') + unitsOf('oj_store10.csv'), weekday: 4 },
      ]);
    } finally {
      await own.close();
    }
  });
});

describe('rows that can’t be taken', () => {
  it('are listed with cell and reason, and come back as a file that runs no formula', async () => {
    const { categoryId, itemCodes } = await makeRange(deps.database, { items: 2 });
    const { importer, cookie } = await planIn(categoryId);
    const read = await importer.upload(
      'mixed.csv',
      [
        'week,item,units,price',
        `2026-W02,${itemCodes[0]},3,2.00`,
        `2026-W02,${itemCodes[1]},many,2.00`,
        `not a week,${itemCodes[1]},-3,2.00`,
        `2026-W02,${itemCodes[0]},4,2.00`,
        `2026-W03,${itemCodes[0]},=1+1,-2`,
      ].join('\n'),
    );
    expect(read).toMatchObject({ rowsTaken: 1, rowsRefused: 4 });
    const refused = read.findings.filter(({ verdict }) => verdict === 'refused');
    expect(refused.map(({ cell, kind, before }) => [cell, kind, before])).toEqual([
      ['C3', 'number-unreadable', 'many'],
      ['A4', 'week-unreadable', 'not a week'],
      ['A5', 'duplicate-row', null],
      ['C6', 'number-unreadable', '=1+1'],
    ]);
    expect(refused.every(({ detail }) => detail.length > 10)).toBe(true);

    const file = await request(app).get(`/api/imports/${read.id}/refused.csv`).set('cookie', cookie);
    expect(file.headers['content-disposition']).toContain('refused-mixed.csv');
    const lines = file.text.replace('\uFEFF', '').trimEnd().split('\r\n');
    expect(lines[0]).toBe('sheet,row,cell,reason,week,item,units,price');
    expect(lines).toHaveLength(5);
    expect(lines[2]).toMatch(new RegExp(`,not a week,${itemCodes[1]},-3,2.00$`));
    expect(lines[4]).toMatch(/,'=1\+1,-2$/);
  });

  it('of items in other people’s categories are refused, unless the person is a data steward', async () => {
    const own = await makeRange(deps.database, { items: 1 });
    const foreign = await makeRange(deps.database, { items: 1 });
    const file = `week,item,units\n2026-W02,${own.itemCodes[0]},3\n2026-W02,${foreign.itemCodes[0]},4\n`;
    const planner = await planIn(own.categoryId);
    const read = await planner.importer.upload('both.csv', file);
    expect(read).toMatchObject({
      rowsTaken: 1,
      rowsRefused: 1,
      findings: [{ kind: 'category-not-yours', cell: 'B3', row: 3, before: foreign.itemCodes[0] }],
    });
    await planner.importer.accept(read.id);
    expect(await inForce(foreign.categoryId)).toEqual([]);
    expect(await inForce(own.categoryId)).toHaveLength(1);

    const steward = await planIn(own.categoryId, { isDataSteward: true });
    const all = await steward.importer.upload('both-again.csv', file);
    expect(all).toMatchObject({ rowsTaken: 2, rowsRefused: 0 });
    await steward.importer.accept(all.id);
    expect(await inForce(foreign.categoryId)).toHaveLength(1);
  });

  it('name a category that only an administrator can create', async () => {
    const { categoryId } = await makeRange(deps.database, { items: 1 });
    const { importer, cookie } = await planIn(categoryId);
    const read = await importer.upload('new.csv', 'week,category,line,item,units\n2026-W02,Nowhere,Some,NEW1,3\n');
    expect(read).toMatchObject({ rowsTaken: 0, rowsRefused: 1, unknown: { categories: ['Nowhere'] } });
    expect(read.findings[0]).toMatchObject({ kind: 'unknown-category', cell: 'B2' });
    expect(read.findings[0]?.detail).toContain('administrator');
    const answer = await request(app)
      .post(`/api/imports/${read.id}/accept`)
      .set('cookie', cookie)
      .send({ createUnknown: true });
    expect(problemOf(answer)).toMatchObject({ type: '/problems/nothing-to-accept', status: 422 });
  });

  it('are left out when new names aren’t to be made', async () => {
    const { categoryId, itemCodes, locationCodes } = await makeRange(deps.database, { items: 1 });
    const { importer } = await planIn(categoryId);
    const read = await importer.upload(
      'partly.csv',
      `week,line,item,location,units\n2026-W02,,${itemCodes[0]},${locationCodes[0]},3\n2026-W02,Fresh,FRESH1,${locationCodes[0]},4\n`,
    );
    expect(read.rowsTaken).toBe(2);
    await importer.accept(read.id, { createUnknown: false });
    const accepted = await importer.read(read.id);
    expect(accepted).toMatchObject({ state: 'accepted', rowsTaken: 1, rowsRefused: 1, units: 3 });
    expect(accepted.findings).toMatchObject([{ kind: 'unknown-left-out', verdict: 'noticed' }]);
    const { rows } = await deps.database.pool.query(`select 1 from item where code = 'FRESH1'`);
    expect(rows).toEqual([]);
  });

  it('stay out under another spelling of a key that came earlier', async () => {
    const { categoryId, lineId } = await makeRange(deps.database, { items: 0 });
    await makeItem(deps.database, lineId, { code: 'PLM-9', name: 'Damson cheese' });
    const { importer } = await planIn(categoryId);
    const read = await importer.upload(
      'spelled.csv',
      'week,item,units\n2026-W02,PLM-9,3\n2026-W02,damson cheese,4\n2026-W03,plm-9,5\n',
    );
    expect(read).toMatchObject({ rowsTaken: 2, rowsRefused: 1, units: 8 });
    expect(read.findings).toMatchObject([{ kind: 'duplicate-row', row: 3, verdict: 'refused' }]);
    await importer.accept(read.id);
    expect((await inForce(categoryId)).map(({ units }) => units)).toEqual([3, 5]);
  });
});

describe('a file in another dialect', () => {
  it('with comma decimals, semicolons and other column names is read right', async () => {
    const { categoryId, itemCodes } = await makeRange(deps.database, { items: 1 });
    const { importer } = await planIn(categoryId);
    const read = await importer.upload(
      'Verkäufe.csv',
      Buffer.from(
        `Sales report\n\nWeek commencing;SKU;Qty;Net sales\n05.01.2026;${itemCodes[0]};1.234,5;2.469,00\n12.01.2026;${itemCodes[0]};10;20,5\n`,
        'latin1',
      ),
    );
    expect(read.fileName).toBe('Verkäufe.csv');
    expect(read.mapping).toMatchObject({ headerRow: 3, decimalMark: ',', weekDateIs: 'first-day', firstWeekday: 1 });
    expect(read.totals).toMatchObject({ rowsTaken: 2, units: 1244.5, netValue: 2489.5, firstWeek: '2026-01-05' });
  });

  it('read with the wrong decimal mark refuses what makes no sense then, and is right once corrected', async () => {
    const { categoryId, itemCodes } = await makeRange(deps.database, { items: 1 });
    const { importer } = await planIn(categoryId);
    const read = await importer.upload(
      'comma.csv',
      `week;item;units;price\n2026-W02;${itemCodes[0]};3;1,99\n2026-W03;${itemCodes[0]};4;2,49\n`,
    );
    expect(read.mapping?.decimalMark).toBe(',');
    const wrong = await importer.changeMapping(read.id, read.mapping && { ...read.mapping, decimalMark: '.' });
    expect(wrong).toMatchObject({ state: 'to-check', rowsTaken: 0, rowsRefused: 2 });
    expect(wrong.findings).toMatchObject([
      { cell: 'D2', kind: 'number-unreadable', before: '1,99' },
      { cell: 'D3', kind: 'number-unreadable', before: '2,49' },
    ]);
    const right = await importer.changeMapping(read.id, wrong.mapping && { ...wrong.mapping, decimalMark: ',' });
    expect(right).toMatchObject({ rowsTaken: 2, rowsRefused: 0, findings: [] });
    expect(right.totals?.netValue).toBeCloseTo(3 * 1.99 + 4 * 2.49, 10);
  });

  it('keeps the answer for the next file that looks alike', async () => {
    const { categoryId, itemCodes } = await makeRange(deps.database, { items: 1 });
    const { importer } = await planIn(categoryId);
    const columns = 'wk;thing;how many;puzzling';
    const read = await importer.upload('odd.csv', `${columns}\n2026-W02;${itemCodes[0]};3;1\n`);
    expect(read).toMatchObject({ state: 'to-check', totals: null, mayAccept: true });
    expect(read.findings[0]).toMatchObject({ kind: 'mapping-incomplete' });
    const corrected = {
      ...read.mapping!,
      columns: read.mapping!.columns.map((column) => ({
        ...column,
        meaning: (['week', 'item', 'units', 'feature'] as const)[column.index] ?? ('ignore' as const),
      })),
    };
    const mapped = await importer.changeMapping(read.id, corrected);
    expect(mapped).toMatchObject({ rowsTaken: 1, units: 3 });
    await importer.accept(mapped.id);

    const next = await importer.upload('odd-2.csv', `${columns}\n2026-W03;${itemCodes[0]};5;0\n`);
    expect(next).toMatchObject({ rowsTaken: 1, units: 5 });
    expect(next.mapping?.columns.map(({ meaning }) => meaning)).toEqual(['week', 'item', 'units', 'feature']);
  });
});

describe('a file that names neither category nor line', () => {
  it('asks where its new items belong, and takes the answer', async () => {
    const categoryId = await makeCategory(deps.database);
    await makeLine(deps.database, categoryId, 'Honey');
    await makeLine(deps.database, categoryId, 'Syrup');
    const { importer, cookie } = await planIn(categoryId);
    const read = await importer.upload('bare.csv', 'week,item,units\n2026-W02,HNY1,3\n2026-W03,HNY1,4\n');
    expect(read).toMatchObject({ rowsTaken: 2, mapping: { categoryId, lineId: null } });
    expect(read.findings[0]).toMatchObject({ kind: 'mapping-incomplete', verdict: 'noticed' });
    const early = await request(app)
      .post(`/api/imports/${read.id}/accept`)
      .set('cookie', cookie)
      .send({ createUnknown: true });
    expect(problemOf(early)).toMatchObject({ type: '/problems/mapping-incomplete', status: 422 });

    const named = await importer.changeMapping(read.id, read.mapping && { ...read.mapping, newLineName: 'Treacle' });
    expect(named.unknown?.lines).toMatchObject([{ line: 'Treacle' }]);
    expect(named.findings).toEqual([]);
    expect((await importer.accept(read.id)).state).toBe('done');
    const { rows } = await deps.database.pool.query(
      `select p.name from product_line p join item_membership m on m.line_id = p.id join item i on i.id = m.item_id where i.code = 'HNY1'`,
    );
    expect(rows).toEqual([{ name: 'Treacle' }]);
  });
});

describe('a file that can’t be read', () => {
  it.each([
    ['empty.csv', ''],
    ['letter.csv', 'Dear colleagues,\nplease find the sales attached.\n'],
    ['picture.xlsx', 'no workbook at all'],
    ['sales.pdf', '%PDF-1.7'],
  ])('%s is refused with a sentence that says what to do', async (name, content) => {
    const { categoryId } = await makeRange(deps.database, { items: 1 });
    const { importer, cookie } = await planIn(categoryId);
    const read = await importer.upload(name, content);
    expect(read).toMatchObject({ state: 'refused', totals: null, mayAccept: false });
    expect(read.refusal).toMatch(/\.$/);
    const answer = await request(app)
      .post(`/api/imports/${read.id}/accept`)
      .set('cookie', cookie)
      .send({ createUnknown: true });
    expect(problemOf(answer)).toMatchObject({ type: '/problems/wrong-state', status: 409 });
    expect((await request(app).delete(`/api/imports/${read.id}`).set('cookie', cookie)).status).toBe(204);
  });

  it('of daily figures is refused as a whole', async () => {
    const { categoryId, itemCodes } = await makeRange(deps.database, { items: 1 });
    const { importer } = await planIn(categoryId);
    const days = Array.from(
      { length: 10 },
      (_, day) => `2026-01-${String(day + 5).padStart(2, '0')},${itemCodes[0]},1`,
    );
    const read = await importer.upload('daily.csv', `date,item,units\n${days.join('\n')}\n`);
    expect(read.state).toBe('refused');
    expect(read.refusal).toContain('by day');
  });
});

describe('who may do what', () => {
  it('a stranger finds nothing, a viewer sees but can’t act, nobody gets in without signing in', async () => {
    const { categoryId, itemCodes } = await makeRange(deps.database, { items: 1 });
    const elsewhere = await makeCategory(deps.database);
    const { importer } = await planIn(categoryId);
    const read = await importer.upload('own.csv', `week,item,units\n2026-W02,${itemCodes[0]},3\n`);
    const stranger = (await planIn(elsewhere)).cookie;
    const viewer = await signIn(
      deps,
      await makePerson(deps.database, { assignments: [{ role: 'viewer', categoryId }] }),
    );
    const path = `/api/imports/${read.id}`;
    for (const action of [
      () => request(app).get(path).set('cookie', stranger),
      () => request(app).get(`${path}/refused.csv`).set('cookie', stranger),
      () => request(app).put(`${path}/mapping`).set('cookie', stranger).send(read.mapping!),
      () => request(app).post(`${path}/accept`).set('cookie', stranger).send({ createUnknown: true }),
      () => request(app).post(`${path}/withdraw`).set('cookie', stranger).send({ reason: 'why not' }),
      () => request(app).delete(path).set('cookie', stranger),
    ]) {
      expect(problemOf(await action())).toMatchObject({ type: '/problems/not-found', status: 404 });
    }
    expect(ImportDetail.parse((await request(app).get(path).set('cookie', viewer)).body).mayAccept).toBe(false);
    for (const action of [
      () => request(app).post(`${path}/accept`).set('cookie', viewer).send({ createUnknown: true }),
      () => request(app).put(`${path}/mapping`).set('cookie', viewer).send(read.mapping!),
      () => request(app).delete(path).set('cookie', viewer),
      () => request(app).post('/api/imports').set('cookie', viewer).attach('file', Buffer.from('x'), 'x.csv'),
    ]) {
      expect(problemOf(await action())).toMatchObject({ type: '/problems/not-allowed', status: 403 });
    }
    expect(problemOf(await request(app).get(path))).toMatchObject({ type: '/problems/not-signed-in', status: 401 });
    expect((await importer.read(read.id)).state).toBe('to-check');
  });

  it('an import that touches no category yet is seen by its author only', async () => {
    const { categoryId } = await makeRange(deps.database, { items: 1 });
    const { importer } = await planIn(categoryId);
    const read = await importer.upload('nothing.csv', 'week,item,units\nnever,X,1\n');
    const administrator = await signIn(
      deps,
      await makePerson(deps.database, { assignments: [{ role: 'administrator', categoryId: null }] }),
    );
    expect((await request(app).get(`/api/imports/${read.id}`).set('cookie', administrator)).status).toBe(404);
  });

  it('who sees only one of a file’s categories gets its state but not its content', async () => {
    const one = await makeRange(deps.database, { items: 1 });
    const two = await makeRange(deps.database, { items: 1 });
    const { importer } = await planIn(one.categoryId, { isDataSteward: true });
    const read = await importer.upload(
      'both.csv',
      `week,item,units\n2026-W02,${one.itemCodes[0]},3\n2026-W02,${two.itemCodes[0]},4\nnever,${two.itemCodes[0]},4\n`,
    );
    const viewer = await signIn(
      deps,
      await makePerson(deps.database, { assignments: [{ role: 'viewer', categoryId: one.categoryId }] }),
    );
    const seen = ImportDetail.parse((await request(app).get(`/api/imports/${read.id}`).set('cookie', viewer)).body);
    expect(seen).toMatchObject({ state: 'to-check', sample: [], findings: [], totals: null, mapping: null });
    expect((await request(app).get(`/api/imports/${read.id}/refused.csv`).set('cookie', viewer)).status).toBe(403);
  });
});

describe('the same file again', () => {
  it('is recognised', async () => {
    const { categoryId, itemCodes } = await makeRange(deps.database, { items: 1 });
    const { importer } = await planIn(categoryId);
    const content = `week,item,units\n2026-W02,${itemCodes[0]},3\n`;
    const first = await importer.upload('a.csv', content);
    expect(first.sameFileAs).toBeNull();
    await importer.accept(first.id);
    const second = await importer.upload('b.csv', content);
    expect(second).toMatchObject({ sameFileAs: first.id, totals: { keysHeld: 1, keysChanged: 0 } });
  });
});

describe('a failure at the very end', () => {
  it('leaves nothing of the import behind, and the import can be accepted again', async () => {
    const categoryId = await makeCategory(deps.database, 'Pickles');
    const { importer } = await planIn(categoryId);
    const read = await importer.upload(
      'pickles.csv',
      'week,category,line,item,location,units\n2026-W02,Pickles,Gherkins,GHE1,East,3\n2026-W03,Pickles,Gherkins,GHE1,East,4\n',
    );
    const count = async () => {
      const { rows } = await deps.database.pool.query(
        `select (select count(*) from sales_entry)::int as entries, (select count(*) from sales_week)::int as weeks,
                (select count(*) from sales_revision)::int as revisions, (select count(*) from item)::int as items,
                (select count(*) from location)::int as locations, (select count(*) from product_line)::int as lines,
                (select count(*) from audit_entry)::int as audited`,
      );
      return rows[0] as Record<string, number>;
    };
    const before = await count();
    const client = new pg.Client({ connectionString: deps.testDatabase.ownerUrl });
    await client.connect();
    try {
      // The audit row is the last thing that an acceptance writes.
      await client.query(`create function break_audit() returns trigger language plpgsql as $$ begin raise exception 'no room on disk'; end $$;
        create trigger break_audit before insert on audit_entry for each row when (new.action = 'import.accept') execute function break_audit()`);
      expect(await importer.accept(read.id)).toMatchObject({ state: 'failed', problem: { type: 'unexpected' } });
      expect(await count()).toEqual(before);
      expect((await importer.read(read.id)).state).toBe('to-check');
      await client.query('drop trigger break_audit on audit_entry');
    } finally {
      await client.end();
    }
    expect((await importer.accept(read.id)).state).toBe('done');
    expect(await inForce(categoryId)).toHaveLength(2);
  });
});

describe('sales of weeks that are locked in a plan', () => {
  it('are pointed out, and taken all the same', async () => {
    const { categoryId, lineId, itemCodes } = await makeRange(deps.database, { items: 1 });
    const { importer, person } = await planIn(categoryId);
    await deps.database.pool.query(
      `insert into lock_event (line_id, first_week, last_week, locked, version, actor_id) values ($1, '2026-01-12', '2026-01-26', true, 1, $2)`,
      [lineId, person.id],
    );
    const weeks = ['2026-W02', '2026-W03', '2026-W04'];
    const rows = weeks.map((week) => `${week},${itemCodes[0]},3`);
    const read = await importer.upload('locked.csv', `week,item,units\n${rows.join('\n')}\n`);
    expect(read.lockedWeeks).toEqual(['2026-01-12', '2026-01-19']);
    expect((await importer.accept(read.id)).state).toBe('done');
    expect(await inForce(categoryId)).toHaveLength(3);
  });
});

describe('a request without a file', () => {
  it('is told which field to fill', async () => {
    const { categoryId } = await makeRange(deps.database, { items: 1 });
    const { cookie } = await planIn(categoryId);
    const bare = await request(app).post('/api/imports').set('cookie', cookie).field('note', 'nothing attached');
    expect(problemOf(bare)).toMatchObject({ type: '/problems/invalid-request', status: 422 });
    const wrongField = await request(app)
      .post('/api/imports')
      .set('cookie', cookie)
      .attach('workbook', Buffer.from('week,item,units'), 'sales.csv');
    expect(problemOf(wrongField)).toMatchObject({ type: '/problems/invalid-request', status: 422 });
  });
});

describe('a file with characters that a database can’t store', () => {
  it('is read without them', async () => {
    const { categoryId, itemCodes } = await makeRange(deps.database, { items: 1 });
    const { importer } = await planIn(categoryId);
    const text = `\uFEFFweek,item,units\n2026-W02,${itemCodes[0]}\u0000,3\nnever \u0000\ud800,${itemCodes[0]},4\n`;
    const read = await importer.upload('wide.csv', Buffer.from(text, 'utf16le'));
    expect(read).toMatchObject({ state: 'to-check', refusal: null, rowsRefused: 1 });
    expect(read.findings.map(({ kind }) => kind)).toContain('week-unreadable');
  });
});

describe('the same acceptance twice', () => {
  it('asked for at once has one effect; the other is told', async () => {
    const { categoryId, itemCodes } = await makeRange(deps.database, { items: 1 });
    const { importer, cookie } = await planIn(categoryId);
    const read = await importer.upload('twice.csv', `week,item,units\n2026-W02,${itemCodes[0]},3\n`);
    const ask = () =>
      request(app).post(`/api/imports/${read.id}/accept`).set('cookie', cookie).send({ createUnknown: false });
    const statuses = (await Promise.all([ask(), ask(), ask()])).map(({ status }) => status).sort();
    expect(statuses).toEqual([202, 409, 409]);
    await runQueuedJobs(deps, importHandlers);
    const { rows } = await deps.database.pool.query(
      'select count(*)::int as entries, count(distinct revision_id)::int as revisions from sales_entry where import_id = $1',
      [read.id],
    );
    expect(rows).toEqual([{ entries: 1, revisions: 1 }]);
  });

  it('run again after its worker died without a word changes nothing', async () => {
    const { categoryId, itemCodes } = await makeRange(deps.database, { items: 1 });
    const { importer } = await planIn(categoryId);
    const read = await importer.upload('again.csv', `week,item,units\n2026-W02,${itemCodes[0]},3\n`);
    const job = await importer.accept(read.id);
    await deps.database.pool.query(`update job set state = 'queued', ended_at = null where id = $1`, [job.id]);
    expect(await runQueuedJobs(deps, importHandlers)).toEqual([job.id]);
    const { rows } = await deps.database.pool.query(
      'select count(*)::int as entries from sales_entry where import_id = $1',
      [read.id],
    );
    expect(rows).toEqual([{ entries: 1 }]);
    expect((await importer.read(read.id)).state).toBe('accepted');
  });
});

import request from 'supertest';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { Session } from '../../../shared/contracts/accounts.ts';
import { Problem } from '../../../shared/contracts/problem.ts';
import { InvitedPerson } from '../../../shared/contracts/settings.ts';
import { buildApp } from '../../../server/app.ts';
import { offerFirstAdministrator } from '../../../server/features/accounts/accounts.service.ts';
import { openDatabase, type Database } from '../../../server/lib/database.ts';
import { readEnv } from '../../../server/lib/env.ts';
import { openLog } from '../../../server/lib/log.ts';
import { createTestDatabase, type TestDatabase } from '../../setup/database.ts';

const password = 'a long enough sentence';
const administrator = { name: 'Ada Quill', email: 'ada@ostrel.example', password };

let testDatabase: TestDatabase;
let database: Database;
let app: ReturnType<typeof buildApp>;

beforeAll(async () => {
  testDatabase = await createTestDatabase();
  database = openDatabase(testDatabase.applicationUrl, { poolSize: 4 });
  const env = readEnv({ DATABASE_URL: testDatabase.applicationUrl, NODE_ENV: 'test', LOG_LEVEL: 'silent' });
  app = buildApp({ database, env, log: openLog('silent') });
});

afterAll(async () => {
  await database.close();
  await testDatabase.drop();
});

function problemOf(response: request.Response): Problem {
  expect(response.headers['content-type']).toContain('application/problem+json');
  return Problem.parse(JSON.parse(response.text));
}

describe('a new installation', () => {
  it('gives the first administrator one link, which works once', async () => {
    const earlier = await offerFirstAdministrator(database);
    const token = await offerFirstAdministrator(database);
    expect(problemOf(await request(app).get(`/api/invitations/${earlier}`)).type).toBe('/problems/link-spent');
    expect((await request(app).get(`/api/invitations/${token}`)).body).toEqual({
      kind: 'first-administrator',
      name: null,
      email: null,
    });

    const short = await request(app)
      .post(`/api/invitations/${token}`)
      .send({ ...administrator, password: 'too short' });
    expect(problemOf(short)).toMatchObject({ status: 422, errors: [{ pointer: '/password' }] });

    const accepted = await request(app).post(`/api/invitations/${token}`).send(administrator);
    expect(accepted.status).toBe(200);
    expect(Session.parse(accepted.body).person.assignments).toEqual([{ role: 'administrator', categoryId: null }]);

    const again = await request(app)
      .post(`/api/invitations/${token}`)
      .send({ ...administrator, email: 'other@ostrel.example' });
    expect(problemOf(again)).toMatchObject({ type: '/problems/link-spent', status: 410 });
    expect(await offerFirstAdministrator(database)).toBeNull();
  });

  it('keeps neither passwords nor tokens readable', async () => {
    const { rows } = await database.pool.query<{ password_hash: string }>('select password_hash from person');
    expect(rows.map((row) => row.password_hash).join()).toMatch(/^\$argon2id\$v=19\$m=19456,t=2,p=1\$/);
    const signedIn = await request(app).post('/api/session').send(administrator);
    const cookie = String(signedIn.headers['set-cookie']);
    const token = /fairweek=([^;]+)/.exec(cookie)?.[1] ?? '';
    expect(token.length).toBeGreaterThan(40);
    expect(cookie).toMatch(/HttpOnly/);
    expect(cookie).toMatch(/SameSite=Lax/);
    const sessions = await database.pool.query<{ id: string }>('select id from session');
    expect(sessions.rows.map(({ id }) => id)).not.toContain(token);
  });
});

describe('signing in', () => {
  it('answers a wrong password and an unknown address alike', async () => {
    const wrong = await request(app)
      .post('/api/session')
      .send({ email: administrator.email, password: 'not the right one at all' });
    const unknown = await request(app)
      .post('/api/session')
      .send({ email: 'nobody@ostrel.example', password: 'not the right one at all' });
    expect(problemOf(wrong)).toMatchObject({ type: '/problems/wrong-credentials', status: 401 });
    expect({ ...problemOf(unknown), instance: '' }).toEqual({ ...problemOf(wrong), instance: '' });
    expect(unknown.headers['set-cookie']).toBeUndefined();
  });

  it('opens a session that signing out ends for good', async () => {
    const agent = request.agent(app);
    const signedIn = await agent.post('/api/session').send(administrator);
    const cookie = String(signedIn.headers['set-cookie']).split(';')[0] ?? '';
    expect((await agent.get('/api/session')).status).toBe(200);
    expect((await agent.delete('/api/session')).status).toBe(204);
    const replay = await request(app).get('/api/session').set('cookie', cookie);
    expect(problemOf(replay)).toMatchObject({ type: '/problems/not-signed-in', status: 401 });
  });

  it('slows down guessing at one account', async () => {
    let last = 0;
    for (let attempt = 0; attempt < 27; attempt += 1) {
      last = (
        await request(app)
          .post('/api/session')
          .send({ email: 'target@ostrel.example', password: `guess ${attempt}` })
      ).status;
    }
    expect(last).toBe(429);
    expect((await request(app).post('/api/session').send(administrator)).status).toBe(200);
  });

  it('takes changes from its own pages only', async () => {
    const foreign = await request(app)
      .post('/api/session')
      .set('origin', 'http://elsewhere.example')
      .send(administrator);
    expect(problemOf(foreign)).toMatchObject({ type: '/problems/foreign-origin', status: 403 });
    const crossSite = await request(app).post('/api/session').set('sec-fetch-site', 'cross-site').send(administrator);
    expect(crossSite.status).toBe(403);
  });
});

describe('people', () => {
  it('join by a link and lose their sessions when their roles change', async () => {
    const admin = request.agent(app);
    await admin.post('/api/session').send(administrator);
    const category = (await admin.post('/api/categories').send({ name: 'Hot drinks' })).body as { id: number };
    const invite = {
      name: 'Ilse Brandt',
      email: 'ilse@ostrel.example',
      isDataSteward: false,
      assignments: [{ role: 'planner', categoryId: category.id }],
    };
    const invited = InvitedPerson.parse((await admin.post('/api/people').send(invite)).body);
    const twice = await admin.post('/api/people').send(invite);
    expect(problemOf(twice)).toMatchObject({ type: '/problems/already-exists', status: 409 });

    const planner = request.agent(app);
    const path = new URL(invited.link).pathname.replace('/invitation/', '/api/invitations/');
    const joined = await planner.post(path).send({ name: 'Ilse Brandt', email: 'ilse@ostrel.example', password });
    expect(Session.parse(joined.body).person.assignments).toEqual(invite.assignments);
    expect((await planner.get('/api/session')).status).toBe(200);

    const refused = await planner.get('/api/people');
    expect(problemOf(refused)).toMatchObject({ type: '/problems/not-allowed', status: 403 });

    const changed = await admin
      .patch(`/api/people/${invited.person.id}`)
      .send({ assignments: [{ role: 'viewer', categoryId: category.id }] });
    expect(changed.status).toBe(200);
    expect((await planner.get('/api/session')).status).toBe(401);

    await admin.patch(`/api/people/${invited.person.id}`).send({ isActive: false });
    const disabled = await request(app).post('/api/session').send({ email: invite.email, password });
    expect(problemOf(disabled).type).toBe('/problems/wrong-credentials');
  });

  it('can’t take their own administration away', async () => {
    const admin = request.agent(app);
    const { person } = Session.parse((await admin.post('/api/session').send(administrator)).body);
    const refused = await admin.patch(`/api/people/${person.id}`).send({ isActive: false });
    expect(problemOf(refused)).toMatchObject({ type: '/problems/wrong-state', status: 409 });
  });
});

describe('the range', () => {
  it('shows a planner the own categories alone, and makes lines only there', async () => {
    const admin = request.agent(app);
    await admin.post('/api/session').send(administrator);
    const own = (await admin.post('/api/categories').send({ name: 'Pantry' })).body as { id: number };
    const foreign = (await admin.post('/api/categories').send({ name: 'Refreshments' })).body as { id: number };
    const invited = InvitedPerson.parse(
      (
        await admin.post('/api/people').send({
          name: 'Rowan Achter',
          email: 'rowan@ostrel.example',
          isDataSteward: false,
          assignments: [{ role: 'planner', categoryId: own.id }],
        })
      ).body,
    );
    const planner = request.agent(app);
    await planner
      .post(new URL(invited.link).pathname.replace('/invitation/', '/api/invitations/'))
      .send({ name: 'Rowan Achter', email: 'rowan@ostrel.example', password });
    const seen = (await planner.get('/api/categories')).body as { categories: { name: string }[] };
    expect(seen.categories.map(({ name }) => name)).toEqual(['Pantry']);
    expect((await planner.post('/api/lines').send({ categoryId: own.id, name: 'Pasta' })).status).toBe(201);
    expect(problemOf(await planner.post('/api/lines').send({ categoryId: own.id, name: 'pasta' })).status).toBe(409);
    expect(problemOf(await planner.post('/api/lines').send({ categoryId: foreign.id, name: 'Juice' })).status).toBe(
      404,
    );
    expect(problemOf(await planner.post('/api/categories').send({ name: 'Mine' })).status).toBe(403);
  });
});

describe('settings', () => {
  it('are read by everyone and changed by administrators, with a trace', async () => {
    const admin = request.agent(app);
    await admin.post('/api/session').send(administrator);
    const changed = await admin.patch('/api/settings').send({ companyName: 'Ostrel Provisions', holidayCountry: 'DE' });
    expect(changed.body).toMatchObject({ companyName: 'Ostrel Provisions', holidayCountry: 'DE', horizonWeeks: 13 });
    expect(problemOf(await admin.patch('/api/settings').send({ currency: 'euro' }))).toMatchObject({
      status: 422,
      errors: [{ pointer: '/currency' }],
    });
    const { rows } = await database.pool.query(`select action from audit_entry where subject = 'settings'`);
    expect(rows).toEqual([{ action: 'change-settings' }]);
    expect(problemOf(await request(app).get('/api/settings')).status).toBe(401);
  });
});

describe('the answers', () => {
  it('are problems even where nothing is, or the body is no JSON', async () => {
    expect(problemOf(await request(app).get('/api/nothing-here')).status).toBe(404);
    const broken = await request(app).post('/api/session').set('content-type', 'application/json').send('{"email":');
    expect(problemOf(broken)).toMatchObject({ type: '/problems/invalid-request', status: 422 });
  });

  it('say whether the server lives and is ready, and forbid foreign frames and scripts', async () => {
    expect((await request(app).get('/health/live')).body).toEqual({ status: 'live' });
    const ready = await request(app).get('/health/ready');
    expect(ready.body).toEqual({ status: 'ready' });
    expect(ready.headers['content-security-policy']).toContain("frame-ancestors 'none'");
    expect(ready.headers['content-security-policy']).toContain("object-src 'none'");
  });
});

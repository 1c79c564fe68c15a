import { randomInt } from 'node:crypto';
import { mkdtemp, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import path from 'node:path';
import type { Job } from '../shared/contracts/jobs.ts';
import type { NewOverride } from '../shared/contracts/plan.ts';
import type { Assignment, Role } from '../shared/domain/roles.ts';
import { addWeeks } from '../shared/domain/weeks.ts';
import { createPersonWithPassword, loadActor } from '../server/features/accounts/accounts.service.ts';
import { runJob } from '../server/features/jobs/jobs.service.ts';
import { createCategory, listCategories } from '../server/features/lines/lines.service.ts';
import { startPack } from '../server/features/packs/packs.service.ts';
import { startForecast } from '../server/features/plan/forecast.service.ts';
import { lockLine, submitLine } from '../server/features/plan/hand-over.service.ts';
import { saveOverrides } from '../server/features/plan/overrides.service.ts';
import { readLinePlan } from '../server/features/plan/plan.service.ts';
import { acceptImport, receiveFile } from '../server/features/sales/imports.service.ts';
import { changeSettings, listReasons } from '../server/features/settings/settings.service.ts';
import { jobHandlers } from '../server/job-handlers.ts';
import type { Actor } from '../server/lib/authorise.ts';
import { inTransaction, openDatabase, type Database } from '../server/lib/database.ts';
import type { Env } from '../server/lib/env.ts';
import { openLog } from '../server/lib/log.ts';
import { categories, companyName, firstWeek, historyWeeks, type DemoCategory } from './company.ts';
import { generateCalendar, generateSales, type CalendarRow, type SalesRow } from './generate-sales.ts';

export interface DemoSignIn {
  email: string;
  password: string;
  role: string;
  name: string;
}

interface DemoPerson {
  name: string;
  email: string;
  role: Role;
  /** Names of the categories; null = all. */
  categories: readonly string[] | null;
  label: string;
}

const people: readonly DemoPerson[] = [
  {
    name: 'Ilse Brandt',
    email: 'ilse@ostrel.example',
    role: 'planner',
    categories: ['Hot drinks', 'Pantry'],
    label: 'planner, Hot drinks and Pantry',
  },
  {
    name: 'Rowan Achter',
    email: 'rowan@ostrel.example',
    role: 'planner',
    categories: ['Refreshments'],
    label: 'planner, Refreshments',
  },
  {
    name: 'Tomas Velde',
    email: 'tomas@ostrel.example',
    role: 'category-lead',
    categories: ['Hot drinks', 'Pantry', 'Refreshments'],
    label: 'category lead',
  },
  { name: 'Judith Amsel', email: 'judith@ostrel.example', role: 'finance', categories: null, label: 'finance' },
  {
    name: 'Pia Lund',
    email: 'pia@ostrel.example',
    role: 'viewer',
    categories: ['Hot drinks'],
    label: 'viewer, Hot drinks',
  },
  {
    name: 'Maren Holt',
    email: 'maren@ostrel.example',
    role: 'administrator',
    categories: null,
    label: 'administrator',
  },
];

/** The last week of the story isn't loaded: it comes as a file to import by hand. */
const loadedWeeks = historyWeeks - 1;
const seam = addWeeks(firstWeek, loadedWeeks);
const horizonWeeks = 13;

/**
 * Loads the invented company into a migrated database without people, through the services that people use: sales and calendar by import,
 * a forecast of each category, overrides, one line locked with its pack, one submitted. Passwords are drawn at random; they are returned and stored as hashes only.
 */
export async function loadDemo({ env }: { env: Env }): Promise<{ signIns: DemoSignIn[] }> {
  const database = openDatabase(env.databaseUrl, { poolSize: 4 });
  try {
    const signIns = people.map(({ email, name, label }) => ({ email, name, role: label, password: drawPassword() }));
    const actors = await createPeople(database, signIns);
    const administrator = demandActor(actors, 'maren@ostrel.example');
    await changeSettings(database, administrator, { companyName, holidayCountry: 'DE', currency: 'EUR', horizonWeeks });
    const log = openLog('warn');
    const finishJob = async (job: Job): Promise<void> => {
      await runJob({ database, log, handlers: jobHandlers, loadActor }, job.id, true);
      const { rows } = await database.pool.query<{ state: string; problem: unknown }>(
        'select state, problem from job where id = $1',
        [job.id],
      );
      if (rows[0]?.state !== 'done')
        throw new Error(`demo job ${job.kind} failed: ${JSON.stringify(rows[0]?.problem)}`);
    };
    const folder = await mkdtemp(path.join(tmpdir(), 'fairweek-demo-'));
    try {
      for (const category of categories) {
        const planner = demandActor(
          actors,
          category.name === 'Refreshments' ? 'rowan@ostrel.example' : 'ilse@ostrel.example',
        );
        await importHistory(database, planner, category, folder, finishJob);
        const known = await listCategories(database, planner);
        const id = known.categories.find(({ name }) => name === category.name)?.id ?? 0;
        await finishJob(await startForecast(database, planner, id, horizonWeeks));
      }
    } finally {
      await rm(folder, { recursive: true, force: true });
    }
    await workOnPlans(database, actors, finishJob);
    return { signIns };
  } finally {
    await database.close();
  }
}

/** Twenty letters in four groups, from an alphabet without look-alikes: about 94 bits. */
function drawPassword(): string {
  const alphabet = 'abcdefghjkmnpqrstuvwxyz2345678';
  const group = () => Array.from({ length: 5 }, () => alphabet[randomInt(alphabet.length)]).join('');
  return [group(), group(), group(), group()].join('-');
}

async function createPeople(database: Database, signIns: readonly DemoSignIn[]): Promise<Map<string, Actor>> {
  const actors = new Map<string, Actor>();
  // The administrator comes first, to make the categories that the others are assigned to.
  const ordered = [...people].sort((a, b) => Number(b.role === 'administrator') - Number(a.role === 'administrator'));
  const categoryIds = new Map<string, number>();
  for (const person of ordered) {
    const assignments: Assignment[] =
      person.categories === null
        ? [{ role: person.role, categoryId: null }]
        : person.categories.map((name) => ({ role: person.role, categoryId: categoryIds.get(name) ?? null }));
    const password = signIns.find(({ email }) => email === person.email)?.password ?? '';
    const actor = await inTransaction(database, (tx) =>
      createPersonWithPassword(tx, { ...person, password, assignments, isDataSteward: false }),
    );
    actors.set(person.email, actor);
    if (person.role !== 'administrator') continue;
    for (const { name } of categories) categoryIds.set(name, (await createCategory(database, actor, name)).id);
  }
  return actors;
}

function demandActor(actors: ReadonlyMap<string, Actor>, email: string): Actor {
  const actor = actors.get(email);
  if (!actor) throw new Error(`no demo person ${email}`);
  return actor;
}

async function importHistory(
  database: Database,
  planner: Actor,
  category: DemoCategory,
  folder: string,
  finishJob: (job: Job) => Promise<void>,
): Promise<void> {
  const files = [
    {
      fileName: `${category.slug}-sales-history.csv`,
      text: writeSales(generateSales(category).filter(({ weekStart }) => weekStart < seam)),
    },
    { fileName: `${category.slug}-calendar.csv`, text: writeCalendar(generateCalendar(category, loadedWeeks)) },
  ];
  for (const { fileName, text } of files) {
    const filePath = path.join(folder, fileName);
    await writeFile(filePath, text);
    const received = await receiveFile(database, planner, { path: filePath, fileName });
    if (received.activeJob) await finishJob(received.activeJob);
    await finishJob(await acceptImport(database, planner, received.id, { createUnknown: true }));
  }
}

function writeSales(rows: readonly SalesRow[]): string {
  const lines = [
    'week,category,line,item,item_name,location,units,net_value,price,regular_price,feature,display,promo_multibuy,gap',
  ];
  for (const row of rows) {
    lines.push(
      [
        row.week,
        row.category,
        row.line,
        row.item,
        `"${row.itemName}"`,
        row.location,
        row.units,
        row.netValue,
        row.price,
        row.regularPrice,
        row.feature,
        row.display,
        row.multibuy,
        row.gap,
      ].join(','),
    );
  }
  return `${lines.join('\n')}\n`;
}

function writeCalendar(rows: readonly CalendarRow[]): string {
  const lines = ['week,category,line,item,location,regular_price,depth,feature,display,promo_multibuy,promotion'];
  for (const row of rows) {
    const { week, category, line, item, location, regularPrice, depth, feature, display, multibuy, promotion } = row;
    lines.push(
      [week, category, line, item, location, regularPrice, depth, feature, display, multibuy, `"${promotion}"`].join(
        ',',
      ),
    );
  }
  return `${lines.join('\n')}\n`;
}

/** Tea is overridden, submitted, locked for eight weeks and packed; Cocoa is submitted; Ground coffee has overrides in draft. */
async function workOnPlans(
  database: Database,
  actors: ReadonlyMap<string, Actor>,
  finishJob: (job: Job) => Promise<void>,
): Promise<void> {
  const planner = demandActor(actors, 'ilse@ostrel.example');
  const lead = demandActor(actors, 'tomas@ostrel.example');
  const finance = demandActor(actors, 'judith@ostrel.example');
  const { reasons } = await listReasons(database);
  const reasonId = (name: string): number | null => reasons.find((reason) => reason.name === name)?.id ?? null;
  const hotDrinks = (await listCategories(database, lead)).categories.find(({ name }) => name === 'Hot drinks');
  if (!hotDrinks) throw new Error('no demo category Hot drinks');
  const lineId = (name: string): number => hotDrinks.lines.find((line) => line.name === name)?.id ?? 0;
  const week = (offset: number): string => addWeeks(seam, offset);

  const override = async (
    actor: Actor,
    line: string,
    changes: readonly (Omit<NewOverride, 'scope' | 'reasonId' | 'note'> & {
      item: string | null;
      reason: string;
      note?: string;
    })[],
  ): Promise<number> => {
    const plan = await readLinePlan(database, actor, lineId(line));
    const saved = await saveOverrides(database, actor, lineId(line), {
      baseVersion: plan.version?.number ?? 0,
      overrides: changes.map(({ item, reason, note, ...change }) => ({
        ...change,
        scope: { itemId: plan.items.find(({ code }) => code === item)?.id ?? null, locationId: null },
        reasonId: reasonId(reason),
        note: note ?? null,
      })),
    });
    return saved.version.number;
  };

  const teaDraft = await override(planner, 'Tea', [
    {
      item: 'TE-05',
      firstWeek: week(2),
      lastWeek: week(3),
      operation: 'scale by',
      value: 1.12,
      reason: 'Weather',
      note: 'Cold spell announced for both weeks.',
    },
    {
      item: 'TE-08',
      firstWeek: week(1),
      lastWeek: week(1),
      operation: 'add',
      value: 60,
      reason: 'Display agreed',
      note: 'Second placement in four stores.',
    },
  ]);
  await submitLine(database, planner, lineId('Tea'), {
    version: teaDraft,
    comment: 'Peppermint raised for the cold spell, the rest is the model.',
  });
  const teaFinal = await override(lead, 'Tea', [
    {
      item: 'TE-01',
      firstWeek: week(4),
      lastWeek: week(4),
      operation: 'scale by',
      value: 0.95,
      reason: 'Supplier short',
    },
  ]);
  await lockLine(database, lead, lineId('Tea'), {
    version: teaFinal,
    firstWeek: week(0),
    lastWeek: week(horizonWeeks - 1),
    comment: null,
  });
  await finishJob(
    await startPack(database, finance, {
      categoryId: hotDrinks.id,
      firstWeek: week(0),
      lastWeek: week(horizonWeeks - 1),
      lineIds: [lineId('Tea')],
    }),
  );

  const cocoaDraft = await override(planner, 'Cocoa', [
    {
      item: 'CO-01',
      firstWeek: week(3),
      lastWeek: week(4),
      operation: 'scale by',
      value: 1.08,
      reason: 'Local event',
      note: 'Winter market in Alderwick.',
    },
  ]);
  await submitLine(database, planner, lineId('Cocoa'), {
    version: cocoaDraft,
    comment: 'Winter market in Alderwick, otherwise as modelled.',
  });

  await override(planner, 'Ground coffee', [
    {
      item: 'GC-01',
      firstWeek: week(3),
      lastWeek: week(3),
      operation: 'scale by',
      value: 1.1,
      reason: 'Display agreed',
      note: 'Twelve stores agreed a second placement.',
    },
    {
      item: 'GC-09',
      firstWeek: week(1),
      lastWeek: week(2),
      operation: 'add',
      value: 40,
      reason: 'Range change',
      note: 'Also in the gift box.',
    },
  ]);
}

import { Settings, type ChangeSettings, type ReasonList } from '../../../shared/contracts/settings.ts';
import { writeAudit } from '../../lib/audit.ts';
import { demandRight, type Actor } from '../../lib/authorise.ts';
import { inTransaction, type Database, type Tx } from '../../lib/database.ts';
import * as repository from './settings.repository.ts';

/** The settings in force, inside the caller's transaction. */
export async function loadSettings(tx: Tx): Promise<Settings> {
  const rows = await repository.listSettings(tx);
  return Settings.parse(Object.fromEntries(rows.map(({ name, value }) => [name, value])));
}

export function readSettings(database: Database): Promise<Settings> {
  return inTransaction(database, loadSettings);
}

export function changeSettings(database: Database, actor: Actor, change: ChangeSettings): Promise<Settings> {
  demandRight(actor, 'administer', null);
  return inTransaction(database, async (tx) => {
    const before = await loadSettings(tx);
    for (const [name, value] of Object.entries(change)) {
      if (value !== undefined) await repository.writeSetting(tx, name, value);
    }
    const after = await loadSettings(tx);
    await writeAudit(tx, { actor, action: 'change-settings', subject: 'settings', old: before, new: after });
    return after;
  });
}

export function listReasons(database: Database): Promise<ReasonList> {
  return inTransaction(database, async (tx) => ({
    reasons: await repository.listReasons(tx),
    noteThreshold: (await loadSettings(tx)).noteThreshold,
  }));
}

import type { Actor } from './authorise.ts';
import { execute, type Tx } from './database.ts';

/** Writes who did what, in the event's own transaction. `subject` is like `line:4`, `import:12`, `person:3`. */
export async function writeAudit(
  tx: Tx,
  entry: {
    actor: Actor | null;
    action: string;
    subject: string;
    categoryId?: number | null;
    old?: unknown;
    new?: unknown;
    why?: string | null;
  },
): Promise<void> {
  await execute(
    tx,
    `insert into audit_entry (actor_id, action, subject, category_id, old, new, why)
     values ($actorId, $action, $subject, $categoryId, $old::jsonb, $new::jsonb, $why)`,
    {
      actorId: entry.actor?.id ?? null,
      action: entry.action,
      subject: entry.subject,
      categoryId: entry.categoryId ?? null,
      old: entry.old === undefined ? null : JSON.stringify(entry.old),
      new: entry.new === undefined ? null : JSON.stringify(entry.new),
      why: entry.why ?? null,
    },
  );
}

import { useCallback, useEffect, useMemo, useState } from 'react';
import { z } from 'zod';
import { OverrideOperation, OverrideScope } from '../../../shared/contracts/plan.ts';
import { WeekStart } from '../../../shared/contracts/primitives.ts';
import { addStep, noEdits, redoStep, undoStep, type PendingEdit, type PendingEdits } from './pending-edits.ts';

const Stored = z.object({
  baseVersion: z.number().int(),
  done: z.array(
    z.array(
      z.object({
        scope: OverrideScope,
        firstWeek: WeekStart,
        lastWeek: WeekStart,
        operation: OverrideOperation,
        value: z.number().nullable(),
      }),
    ),
  ),
});

function readStored(key: string): PendingEdits {
  try {
    const stored = Stored.safeParse(JSON.parse(sessionStorage.getItem(key) ?? 'null'));
    return stored.success ? { ...stored.data, undone: [] } : noEdits;
  } catch {
    return noEdits;
  }
}

function writeStored(key: string, { baseVersion, done }: PendingEdits): void {
  try {
    if (done.length === 0) sessionStorage.removeItem(key);
    else sessionStorage.setItem(key, JSON.stringify({ baseVersion, done }));
  } catch {
    // Where the browser stores nothing, edits last as long as the page; leaving it asks first.
  }
}

/**
 * A person's unsaved edits of one line. They outlive a reload and a look at another page of the same tab; closing the tab asks first.
 * `storageKey` names person and line.
 */
export function useLineEdits(storageKey: string) {
  const [edits, setEdits] = useState<PendingEdits>(() => readStored(storageKey));
  const [wereRestored] = useState(() => edits.done.length > 0);
  const hasEdits = edits.done.length > 0;
  useEffect(() => writeStored(storageKey, edits), [storageKey, edits]);
  useEffect(() => {
    if (!hasEdits) return;
    const ask = (event: BeforeUnloadEvent) => event.preventDefault();
    window.addEventListener('beforeunload', ask);
    return () => window.removeEventListener('beforeunload', ask);
  }, [hasEdits]);

  const add = useCallback(
    (step: PendingEdit[], shownVersion: number) => setEdits((held) => addStep(held, step, shownVersion)),
    [],
  );
  const undo = useCallback(() => setEdits(undoStep), []);
  const redo = useCallback(() => setEdits(redoStep), []);
  const discard = useCallback(() => setEdits(noEdits), []);
  /** Puts settled edits in place of all others, based on the version that they were settled against. */
  const replace = useCallback(
    (settled: PendingEdit[], baseVersion: number) =>
      setEdits(settled.length === 0 ? noEdits : { baseVersion, done: [settled], undone: [] }),
    [],
  );
  return useMemo(
    () => ({ edits, wereRestored, add, undo, redo, discard, replace }),
    [edits, wereRestored, add, undo, redo, discard, replace],
  );
}

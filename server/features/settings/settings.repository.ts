import type { Reason } from '../../../shared/contracts/settings.ts';
import { execute, selectRows, type Tx } from '../../lib/database.ts';

export function listSettings(tx: Tx): Promise<{ name: string; value: unknown }[]> {
  return selectRows(tx, 'select name, value from setting');
}

export async function writeSetting(tx: Tx, name: string, value: unknown): Promise<void> {
  await execute(
    tx,
    'insert into setting (name, value) values ($name, $value::jsonb) on conflict (name) do update set value = excluded.value',
    {
      name,
      value: JSON.stringify(value),
    },
  );
}

export function listReasons(tx: Tx): Promise<Reason[]> {
  return selectRows<Reason>(tx, 'select id, name, is_active as "isActive" from reason order by position, id');
}

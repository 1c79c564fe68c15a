/** Change of one row between two states of the plan, over weeks that both hold. */
export interface RowChange {
  key: string;
  name: string;
  before: number;
  now: number;
  change: number;
}

/** The rows that moved most, largest first; `rest` of them and their largest change are left out. Rows that didn't move don't count. */
export function findMovers(
  rows: readonly { key: string; name: string; before: number; now: number }[],
  most: number,
): { movers: RowChange[]; rest: number; largestOfRest: number } {
  const moved = rows
    .map((row) => ({ ...row, change: row.now - row.before }))
    .filter(({ change }) => Math.abs(change) > 1e-9)
    .sort((a, b) => Math.abs(b.change) - Math.abs(a.change) || a.name.localeCompare(b.name));
  const rest = moved.slice(most);
  return {
    movers: moved.slice(0, most),
    rest: rest.length,
    largestOfRest: Math.abs(rest[0]?.change ?? 0),
  };
}

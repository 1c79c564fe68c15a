import { isIsoDate } from '../../../shared/domain/weeks.ts';
import { rowModes, type RowMode } from './grid-rows.ts';

/** What the address holds of a line's page, so that a link brings the same view back. */
export interface PageState {
  down: RowMode;
  locationId: number | null;
  from: string | null;
  to: string | null;
  /** The active cell and, where more are selected, the opposite corner. */
  cell: { row: string; weekStart: string } | null;
  head: { row: string; weekStart: string } | null;
  version: number | null;
  /** The drawer: as the person set it, or null = open where there is room beside the grid. */
  isWhyOpen: boolean | null;
  isVersionsOpen: boolean;
}

function readCell(text: string | null): PageState['cell'] {
  const match = /^([a-z0-9]+)\.(\d{4}-\d{2}-\d{2})$/.exec(text ?? '');
  const [, row, weekStart] = match ?? [];
  return row && weekStart && isIsoDate(weekStart) ? { row, weekStart } : null;
}

const readWeek = (text: string | null) => (text !== null && isIsoDate(text) ? text : null);
const readId = (text: string | null) => (text !== null && /^[1-9]\d{0,14}$/.test(text) ? Number(text) : null);

export function readPageState(search: URLSearchParams): PageState {
  const down = search.get('down');
  const why = search.get('why');
  return {
    down: rowModes.find((mode) => mode === down) ?? 'items',
    locationId: readId(search.get('location')),
    from: readWeek(search.get('from')),
    to: readWeek(search.get('to')),
    cell: readCell(search.get('cell')),
    head: readCell(search.get('head')),
    version: readId(search.get('version')),
    isWhyOpen: why === null ? null : why === 'yes',
    isVersionsOpen: search.get('versions') === 'yes',
  };
}

/** The address with some of it changed; what is as at first is left out. */
export function writePageState(search: URLSearchParams, change: Partial<PageState>): URLSearchParams {
  const next = new URLSearchParams(search);
  if (change.cell) next.delete('item');
  const put = (name: string, value: string | null) => {
    if (value === null) next.delete(name);
    else next.set(name, value);
  };
  const cellText = (cell: PageState['cell']) => (cell ? `${cell.row}.${cell.weekStart}` : null);
  if (change.down !== undefined) put('down', change.down === 'items' ? null : change.down);
  if (change.locationId !== undefined) put('location', change.locationId === null ? null : String(change.locationId));
  if (change.from !== undefined) put('from', change.from);
  if (change.to !== undefined) put('to', change.to);
  if (change.cell !== undefined) put('cell', cellText(change.cell));
  if (change.head !== undefined) put('head', cellText(change.head));
  if (change.version !== undefined) put('version', change.version === null ? null : String(change.version));
  if (change.isWhyOpen !== undefined) put('why', change.isWhyOpen === null ? null : change.isWhyOpen ? 'yes' : 'no');
  if (change.isVersionsOpen !== undefined) put('versions', change.isVersionsOpen ? 'yes' : null);
  return next;
}

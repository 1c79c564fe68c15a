import type { ImportMapping } from '../../../shared/contracts/sales.ts';
import type { Weekday } from '../../../shared/domain/weeks.ts';
import type { ImportMapping as TableMapping, ReadingForm } from '../../workbooks/reading/inspect-table.ts';

/** Which rows and columns the reader takes. A mechanic without a name goes by its header. */
export function toTableMapping(mapping: ImportMapping): TableMapping {
  return {
    sheets: [{ name: mapping.sheet ?? '', headerRow: mapping.headerRow }, ...(mapping.moreSheets ?? [])],
    columns: mapping.columns.map(({ index, header, meaning, mechanicName, scale }) => ({
      column: index,
      meaning,
      ...(meaning === 'mechanic' ? { mechanic: nameMechanic(mechanicName ?? header) } : {}),
      ...(scale === undefined ? {} : { scale }),
    })),
  };
}

/** How cells are understood; `proposed` fills what the mapping leaves open. */
export function toReadingForm(mapping: ImportMapping, proposed: ReadingForm): ReadingForm {
  return {
    decimalSign: mapping.decimalMark,
    dateOrder: mapping.dateOrder ?? proposed.dateOrder,
    yearNumberIs: mapping.yearNumberIs ?? proposed.yearNumberIs,
    weekDateIs: mapping.weekDateIs,
    firstWeekday: mapping.firstWeekday as Weekday,
  };
}

function nameMechanic(text: string): string {
  const name = text
    .toLowerCase()
    .replace(/^promo_/, '')
    .replace(/[^a-z0-9]+/g, '_')
    .replace(/^_+|_+$/g, '')
    .slice(0, 40);
  return name === '' ? 'other' : name;
}

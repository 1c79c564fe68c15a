import type { ColumnMeaning, ImportMapping } from '../../../shared/contracts/sales.ts';
import type { ColumnMeaning as ReadMeaning } from '../../../shared/domain/column-meanings.ts';
import type { Weekday } from '../../../shared/domain/weeks.ts';
import type { ImportMapping as TableMapping, ReadingForm } from '../../workbooks/reading/inspect-table.ts';

const readMeanings: Readonly<Record<ColumnMeaning, ReadMeaning>> = {
  week: 'week',
  category: 'category',
  line: 'line',
  item: 'item',
  'item-name': 'itemName',
  location: 'location',
  units: 'units',
  'net-value': 'netValue',
  price: 'price',
  'regular-price': 'regularPrice',
  depth: 'depth',
  feature: 'feature',
  display: 'display',
  mechanic: 'mechanic',
  gap: 'gap',
  'days-open': 'daysOpen',
  'promotion-name': 'promotionName',
  ignore: 'ignore',
};

const contractMeanings = Object.fromEntries(
  Object.entries(readMeanings).map(([contract, read]) => [read, contract]),
) as Record<ReadMeaning, ColumnMeaning>;

/** The word of the API for what the workbook reader calls it. */
export function toContractMeaning(meaning: ReadMeaning): ColumnMeaning {
  return contractMeanings[meaning];
}

/** Which rows and columns the reader takes. A mechanic without a name goes by its header. */
export function toTableMapping(mapping: ImportMapping): TableMapping {
  return {
    sheets: [{ name: mapping.sheet ?? '', headerRow: mapping.headerRow }, ...(mapping.moreSheets ?? [])],
    columns: mapping.columns.map(({ index, header, meaning, mechanicName, scale }) => ({
      column: index,
      meaning: readMeanings[meaning],
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

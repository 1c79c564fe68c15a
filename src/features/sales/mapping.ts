import type { ColumnMeaning, ImportMapping } from '../../../shared/contracts/sales.ts';

/** Spreadsheet letter of a 0-based column: A … Z, AA … */
export function columnLetter(index: number): string {
  let letters = '';
  for (let rest = index + 1; rest > 0; rest = Math.floor((rest - 1) / 26)) {
    letters = String.fromCharCode(65 + ((rest - 1) % 26)) + letters;
  }
  return letters;
}

/** Meanings that only one column may have; a mechanic and `ignore` may stand on many. */
const isSingle = (meaning: ColumnMeaning) => meaning !== 'mechanic' && meaning !== 'ignore';

/** The mapping with one column's meaning changed; another column that had it is not used any more. */
export function giveMeaning(mapping: ImportMapping, index: number, meaning: ColumnMeaning): ImportMapping {
  return {
    ...mapping,
    columns: mapping.columns.map((column) => {
      if (column.index === index) {
        return {
          ...column,
          meaning,
          confidence: 1,
          mechanicName:
            meaning === 'mechanic' ? (column.mechanicName ?? column.header.trim().toLowerCase()) : undefined,
        };
      }
      if (isSingle(meaning) && column.meaning === meaning) return { ...column, meaning: 'ignore', confidence: 1 };
      return column;
    }),
  };
}

export type MissingPart = 'week' | 'item' | 'units' | 'mechanic' | 'planned';

const planned: ColumnMeaning[] = ['regularPrice', 'depth', 'feature', 'display', 'mechanic'];

/**
 * What still has to be answered before the file can be read with this mapping. Whether it needs a category or a line chosen only the
 * server knows, who knows the items: it says so among the findings.
 */
export function listMissing(mapping: ImportMapping): MissingPart[] {
  const has = (meaning: ColumnMeaning) => mapping.columns.some((column) => column.meaning === meaning);
  const missing: MissingPart[] = [];
  if (!has('week')) missing.push('week');
  if (!has('item')) missing.push('item');
  if (mapping.kind === 'sales') {
    if (!has('units')) missing.push('units');
  } else if (!planned.some(has)) {
    missing.push('planned');
  }
  if (mapping.columns.some((column) => column.meaning === 'mechanic' && !column.mechanicName?.trim())) {
    missing.push('mechanic');
  }
  return missing;
}

/** Whether two mappings read a file alike. */
export function isSameMapping(a: ImportMapping, b: ImportMapping): boolean {
  const plain = (mapping: ImportMapping) =>
    JSON.stringify({
      ...mapping,
      columns: mapping.columns.map(({ index, meaning, mechanicName }) => [index, meaning, mechanicName ?? '']),
    });
  return plain(a) === plain(b);
}

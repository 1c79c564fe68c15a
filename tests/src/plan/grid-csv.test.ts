import Papa from 'papaparse';
import { describe, expect, it } from 'vitest';
import { buildColumns } from '../../../src/features/plan/grid-columns.ts';
import { writeGridCsv } from '../../../src/features/plan/grid-csv.ts';
import type { GridViewRow } from '../../../src/features/plan/grid-table.ts';

const columns = buildColumns(
  { historyFirstWeek: '2026-11-23', planFirstWeek: '2026-11-30', planWeeks: 1, lockedWeeks: [] },
  '2026-11-23',
  '2026-11-30',
);
const words = { corner: 'Item', sold: 'sold', planned: 'planned' };

function row(name: string, sold: number | null, plan: number): Pick<GridViewRow, 'name' | 'figures'> {
  return { name, figures: { history: [sold], gaps: [0], model: [plan], plan: [plan], marks: [] } };
}

describe('writeGridCsv', () => {
  it('is read back alike by another reader, in either decimal mark', () => {
    const rows = [row('Tea, green; "loose"', 12.5, 40), row('Cocoa', null, 1234)];
    for (const mark of ['.', ','] as const) {
      const { data, meta } = Papa.parse<string[]>(writeGridCsv(rows, columns, words, mark).replace('\ufeff', ''), {
        skipEmptyLines: true,
      });
      expect(meta.delimiter).toBe(mark === ',' ? ';' : ',');
      expect(data).toEqual([
        ['Item', '2026-W48', '2026-W49'],
        ['', 'sold', 'planned'],
        ['Tea, green; "loose"', mark === ',' ? '12,5' : '12.5', '40'],
        ['Cocoa', '', '1234'],
      ]);
    }
  });

  it.each(['=1+1', '+49', '-2', '@sum', '\tx'])('lets no name run as a formula: %s', (name) => {
    const [, , line] = writeGridCsv([row(name, 1, 2)], columns, words, '.').split('\r\n');
    expect(line?.startsWith(`'${name}`)).toBe(true);
  });

  it('leaves a week empty that a version doesn’t hold', () => {
    const [, , line] = writeGridCsv([row('Tea', 1, Number.NaN)], columns, words, '.').split('\r\n');
    expect(line).toBe('Tea,1,');
  });
});

import Papa from 'papaparse';
import { describe, expect, it } from 'vitest';
import { writeRefusedRows } from '../../../server/features/sales/refused-rows.ts';

function cellsOf(values: string[]): string[] {
  const text = writeRefusedRows(
    values.map((_, index) => `column ${index}`),
    [{ sheet: null, cell: 'A2', row: 2, detail: 'why', rowValues: values }],
  );
  return (Papa.parse<string[]>(text.replace('\uFEFF', '')).data[1] ?? []).slice(4);
}

describe('refused rows as a file', () => {
  it('lets no text run as a formula in a spreadsheet program', () => {
    // OWASP, "CSV Injection": a field that begins with = + - @, tab or carriage return.
    const hostile = ['=1+1', '+1+1', '-1+1', '@SUM(A1)', '\t=1', '\r=1', '=HYPERLINK("x")', '-'];
    expect(cellsOf(hostile)).toEqual(hostile.map((text) => `'${text}`));
  });

  it('leaves numbers as they are, negative ones too', () => {
    const numbers = ['-3', '-3.5', '+4', '-1.234,50', '0', '12'];
    expect(cellsOf(numbers)).toEqual(numbers);
  });

  it('keeps quotes, commas and line breaks inside a cell', () => {
    const texts = ['a,b', 'say "yes"', 'two\nlines', ''];
    expect(cellsOf(texts)).toEqual(texts);
  });
});

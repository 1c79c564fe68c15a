import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { formatRectangle, parseRectangle, readRectangle } from '../../../src/features/plan/paste.ts';

describe('parseRectangle', () => {
  it('cuts rows at any line end and drops the last one', () => {
    expect(parseRectangle('1\t2\r\n3\t4\n5\t6\r')).toEqual([
      ['1', '2'],
      ['3', '4'],
      ['5', '6'],
    ]);
  });

  it('keeps tabs, line ends and quotes inside quotes', () => {
    expect(parseRectangle('"a\tb"\t"say ""yes"""\n"two\nlines"')).toEqual([['a\tb', 'say "yes"'], ['two\nlines']]);
  });

  it('keeps empty cells at the edges', () => {
    expect(parseRectangle('\t1\t\n')).toEqual([['', '1', '']]);
    expect(parseRectangle('')).toEqual([]);
  });
});

describe('copy and paste', () => {
  it('brings the same numbers back in either decimal mark', () => {
    const value = fc.oneof(
      fc.constant(null),
      fc.integer({ min: 0, max: 99_999_999 }),
      fc.integer({ min: 0, max: 99_999_999 }).map((n) => n / 10),
    );
    const rectangle = fc
      .tuple(fc.integer({ min: 1, max: 5 }), fc.integer({ min: 2, max: 5 }))
      .chain(([rows, columns]) =>
        fc.array(fc.array(value, { minLength: columns, maxLength: columns }), { minLength: rows, maxLength: rows }),
      );
    fc.assert(
      fc.property(rectangle, fc.constantFrom('.' as const, ',' as const), (values, mark) => {
        const read = readRectangle(parseRectangle(formatRectangle(values, mark)), mark);
        const own = read.kind === 'two-ways' ? read.byMark[mark] : read.kind === 'numbers' ? read.values : null;
        expect(own).toEqual(values);
      }),
    );
  });
});

describe('readRectangle', () => {
  it('asks where every cell can be read two ways', () => {
    const read = readRectangle([['1,100', '1,200']], '.');
    expect(read).toMatchObject({
      kind: 'two-ways',
      example: '1,100',
      byMark: { '.': [[1100, 1200]], ',': [[1.1, 1.2]] },
    });
  });

  it('lets one cell settle all others', () => {
    expect(readRectangle([['1,100', '1,200.5']], '.')).toEqual({ kind: 'numbers', values: [[1100, 1200.5]] });
    expect(readRectangle([['1,100', '1200,55']], '.')).toEqual({ kind: 'numbers', values: [[1.1, 1200.55]] });
  });

  it('doesn’t ask where both readings agree', () => {
    expect(readRectangle([['1100', '', '7']], '.')).toEqual({ kind: 'numbers', values: [[1100, null, 7]] });
  });

  it('names the cells that are no numbers', () => {
    expect(
      readRectangle(
        [
          ['1', 'n/a'],
          ['x', '2'],
        ],
        '.',
      ),
    ).toEqual({
      kind: 'unreadable',
      cells: [
        { row: 0, column: 1, text: 'n/a' },
        { row: 1, column: 0, text: 'x' },
      ],
    });
  });
});

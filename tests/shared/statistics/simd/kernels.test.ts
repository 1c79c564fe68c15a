import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { compileKernels } from '../../../../server/cli/kernels/compile-kernels.ts';
import { kernelBytes } from '../../../../shared/statistics/simd/kernel-bytes.ts';
import { openTile, tileRows } from '../../../../shared/statistics/simd/kernels.ts';

/** Thousandths: sums of their products are the same in any order to far below 1e-9. */
const thousandths = fc.integer({ min: -5000, max: 5000 }).map((value) => value / 1000);

/** Sizes around multiples of three, and so many columns that the memory has to grow. */
const columnCount = fc.oneof(fc.integer({ min: 1, max: 14 }), fc.constant(200));

function fillTile(columns: number, drawn: readonly number[]) {
  const tile = openTile(columns);
  for (let c = 0; c < columns; c++) {
    for (let r = 0; r < tileRows; r++) tile.values[c * tileRows + r] = drawn[(c * 31 + r * 7) % drawn.length]!;
  }
  return tile;
}

describe('the SIMD kernels', () => {
  it('are what their source compiles to', async () => {
    expect(await compileKernels()).toBe(kernelBytes);
  });

  it('add XᵀX of each tile to what is there', () => {
    fc.assert(
      fc.property(columnCount, fc.array(thousandths, { minLength: 50, maxLength: 101 }), (columns, drawn) => {
        const tile = fillTile(columns, drawn);
        tile.addGram();
        tile.addGram();
        let worst = 0;
        for (let i = 0; i < columns; i++) {
          for (let j = i; j < columns; j++) {
            let sum = 0;
            for (let r = 0; r < tileRows; r++) sum += tile.values[i * tileRows + r]! * tile.values[j * tileRows + r]!;
            worst = Math.max(worst, Math.abs(tile.square[i * tile.columns + j]! - 2 * sum));
          }
        }
        expect(worst).toBeLessThanOrEqual(1e-9);
      }),
      { numRuns: 30 },
    );
  });

  it('measure the rows times an upper triangle', () => {
    fc.assert(
      fc.property(columnCount, fc.array(thousandths, { minLength: 50, maxLength: 101 }), (columns, drawn) => {
        const tile = fillTile(columns, drawn);
        for (let k = 0; k < columns; k++) {
          for (let c = k; c < columns; c++) tile.square[k * tile.columns + c] = drawn[(k * 13 + c * 5) % drawn.length]!;
        }
        const lengths = tile.measureRows();
        for (let r = 0; r < tileRows; r++) {
          let square = 0;
          for (let c = 0; c < columns; c++) {
            let sum = 0;
            for (let k = 0; k <= c; k++) {
              sum += tile.values[k * tileRows + r]! * tile.square[k * tile.columns + c]!;
            }
            square += sum * sum;
          }
          expect(Math.abs(lengths[r]! - square)).toBeLessThanOrEqual(1e-11 * square + 1e-9);
        }
      }),
      { numRuns: 30 },
    );
  });

  it('start from zeros whatever the tile before held', () => {
    fillTile(9, [1, 2, 3]).addGram();
    const tile = openTile(9);
    expect(tile.values.every((value) => value === 0)).toBe(true);
    expect(tile.square.every((value) => value === 0)).toBe(true);
  });
});

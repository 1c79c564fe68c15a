import { kernelBytes } from './kernel-bytes.ts';

/** Rows of a tile, as in assembly/kernels.ts. */
export const tileRows = 64;

interface KernelExports {
  memory: WebAssembly.Memory;
  addGram: (tile: number, columns: number, gram: number) => void;
  measureRows: (tile: number, columns: number, upper: number, lengths: number) => void;
}

/**
 * Two loops of least squares with two numbers to an instruction (WebAssembly SIMD), on one tile of rows at a time. The views belong to this module's one
 * memory: they hold until the next call of `openTile`, and nobody may wait in between.
 */
export interface Tile {
  /** tileRows × columns, column by column: row r of column c at c · tileRows + r. Rows and columns that aren't used must be 0. */
  values: Float64Array;
  /** A multiple of 3, at least as many as asked for. */
  columns: number;
  /** columns × columns, row by row; zeros at first. */
  square: Float64Array;
  /** Adds the tile's XᵀX to `square`, on and above the diagonal. */
  addGram: () => void;
  /** Squared length of each of the tile's rows times `square`, an upper triangle. */
  measureRows: () => Float64Array;
}

const pageBytes = 65_536;
let kernels: KernelExports | null = null;

/** A tile of zeros with place for so many columns. */
export function openTile(columnsAsked: number): Tile {
  kernels ??= startKernels();
  const { memory, addGram, measureRows } = kernels;
  const columns = 3 * Math.ceil(columnsAsked / 3);
  const squareAt = 8 * tileRows * columns;
  const lengthsAt = squareAt + 8 * columns * columns;
  const missing = lengthsAt + 8 * tileRows - memory.buffer.byteLength;
  if (missing > 0) memory.grow(Math.ceil(missing / pageBytes));
  const values = new Float64Array(memory.buffer, 0, tileRows * columns).fill(0);
  const square = new Float64Array(memory.buffer, squareAt, columns * columns).fill(0);
  const lengths = new Float64Array(memory.buffer, lengthsAt, tileRows);
  return {
    values,
    columns,
    square,
    addGram: () => addGram(0, columns, squareAt),
    measureRows: () => {
      measureRows(0, columns, squareAt, lengthsAt);
      return lengths;
    },
  };
}

function startKernels(): KernelExports {
  const bytes = Uint8Array.from(atob(kernelBytes), (character) => character.charCodeAt(0));
  return new WebAssembly.Instance(new WebAssembly.Module(bytes)).exports as unknown as KernelExports;
}

/** Rows handled at a time, so that a chunk of all columns stays in the second-level cache. */
const chunkRows = 256;

/**
 * XᵀX of a column-major rows × columns matrix; columns × columns, row-major, both triangles filled.
 * Nine dot products run side by side on three columns against three, over chunks of rows: six loads for nine multiplications.
 */
export function computeGram(matrix: Float64Array, rows: number, columns: number): Float64Array {
  const gram = new Float64Array(columns * columns);
  for (let from = 0; from < rows; from += chunkRows) {
    addChunk(matrix, rows, columns, from, Math.min(rows, from + chunkRows), gram);
  }
  for (let i = 0; i < columns; i++) {
    for (let j = i + 1; j < columns; j++) gram[j * columns + i] = gram[i * columns + j]!;
  }
  return gram;
}

function addChunk(
  matrix: Float64Array,
  rows: number,
  columns: number,
  from: number,
  to: number,
  gram: Float64Array,
): void {
  for (let i = 0; i < columns; i += 3) {
    if (i + 3 > columns) {
      for (let a = i; a < columns; a++) {
        for (let b = a; b < columns; b++) gram[a * columns + b]! += dotColumns(matrix, a * rows, b * rows, from, to);
      }
      return;
    }
    const x0 = i * rows;
    const x1 = x0 + rows;
    const x2 = x1 + rows;
    let j = i;
    for (; j + 3 <= columns; j += 3) {
      const y0 = j * rows;
      const y1 = y0 + rows;
      const y2 = y1 + rows;
      let s00 = 0;
      let s01 = 0;
      let s02 = 0;
      let s10 = 0;
      let s11 = 0;
      let s12 = 0;
      let s20 = 0;
      let s21 = 0;
      let s22 = 0;
      for (let r = from; r < to; r++) {
        const a0 = matrix[x0 + r]!;
        const a1 = matrix[x1 + r]!;
        const a2 = matrix[x2 + r]!;
        const b0 = matrix[y0 + r]!;
        const b1 = matrix[y1 + r]!;
        const b2 = matrix[y2 + r]!;
        s00 += a0 * b0;
        s01 += a0 * b1;
        s02 += a0 * b2;
        s10 += a1 * b0;
        s11 += a1 * b1;
        s12 += a1 * b2;
        s20 += a2 * b0;
        s21 += a2 * b1;
        s22 += a2 * b2;
      }
      const g0 = i * columns + j;
      const g1 = g0 + columns;
      const g2 = g1 + columns;
      gram[g0]! += s00;
      gram[g0 + 1]! += s01;
      gram[g0 + 2]! += s02;
      gram[g1]! += s10;
      gram[g1 + 1]! += s11;
      gram[g1 + 2]! += s12;
      gram[g2]! += s20;
      gram[g2 + 1]! += s21;
      gram[g2 + 2]! += s22;
    }
    for (; j < columns; j++) {
      for (let a = i; a < i + 3; a++) gram[a * columns + j]! += dotColumns(matrix, a * rows, j * rows, from, to);
    }
  }
}

function dotColumns(matrix: Float64Array, a: number, b: number, from: number, to: number): number {
  let sum = 0;
  for (let r = from; r < to; r++) sum += matrix[a + r]! * matrix[b + r]!;
  return sum;
}

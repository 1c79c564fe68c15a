import { InvalidInputError, NonFiniteInputError } from '../errors.ts';
import type { LeastSquaresInput } from './types.ts';

/** The name of a column for messages. */
export function nameColumn(input: Pick<LeastSquaresInput, 'names'>, column: number): string {
  return input.names?.[column] ?? `column ${column + 1}`;
}

/** Throws InvalidInputError for lengths that don't fit and negative weights or penalties, NonFiniteInputError for NaN or ±∞. */
export function checkLeastSquaresInput(input: LeastSquaresInput): void {
  checkLeastSquaresShape(input);
  const { design, rows, columns, response } = input;
  for (let k = 0; k < design.length; k++) {
    if (!Number.isFinite(design[k])) {
      throw new NonFiniteInputError(`${nameColumn(input, k % columns)} in row ${Math.floor(k / columns) + 1}`);
    }
  }
  for (let i = 0; i < rows; i++) {
    if (!Number.isFinite(response[i])) throw new NonFiniteInputError(`the response in row ${i + 1}`);
  }
}

/** The same without a look at the values of design and response. */
export function checkLeastSquaresShape(input: LeastSquaresInput): void {
  const { design, rows, columns, response, weights, penalties, names } = input;
  if (!Number.isInteger(rows) || !Number.isInteger(columns) || rows < 1 || columns < 1) {
    throw new InvalidInputError('a least-squares fit needs at least one row and one column');
  }
  if (design.length !== rows * columns) throw new InvalidInputError(`design is not ${rows} × ${columns}`);
  if (response.length !== rows) throw new InvalidInputError(`response has ${response.length} values for ${rows} rows`);
  if (weights && weights.length !== rows) throw new InvalidInputError(`${weights.length} weights for ${rows} rows`);
  if (penalties && penalties.length !== columns) {
    throw new InvalidInputError(`${penalties.length} penalties for ${columns} columns`);
  }
  if (names && names.length !== columns) throw new InvalidInputError(`${names.length} names for ${columns} columns`);
  checkNonNegative(weights, 'weight');
  checkNonNegative(penalties, 'penalty');
}

function checkNonNegative(values: Float64Array | undefined, what: string): void {
  if (!values) return;
  for (let i = 0; i < values.length; i++) {
    if (!Number.isFinite(values[i])) throw new NonFiniteInputError(`${what} ${i + 1}`);
    if (values[i]! < 0) throw new InvalidInputError(`${what} ${i + 1} is negative`);
  }
}

/** Rows that carry weight. */
export function countWeightedRows(input: Pick<LeastSquaresInput, 'rows' | 'weights'>): number {
  if (!input.weights) return input.rows;
  let count = 0;
  for (const weight of input.weights) if (weight > 0) count++;
  return count;
}

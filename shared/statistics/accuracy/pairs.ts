import { InvalidInputError, NonFiniteInputError } from '../errors.ts';

/** Throws unless the lists are equally long, not empty and finite throughout. */
export function checkPairs(lists: Readonly<Record<string, ArrayLike<number>>>): number {
  let length: number | undefined;
  for (const [name, values] of Object.entries(lists)) {
    length ??= values.length;
    if (values.length !== length) throw new InvalidInputError(`${name} has ${values.length} values, not ${length}`);
    for (let i = 0; i < values.length; i++) {
      if (!Number.isFinite(values[i])) throw new NonFiniteInputError(`${name} ${i + 1}`);
    }
  }
  if (!length) throw new InvalidInputError('accuracy needs at least one forecast');
  return length;
}

// With the `u` flag a pair of surrogates is one character, so only halves without their other half match.
// eslint-disable-next-line no-control-regex -- the zero character is what has to go
const unstorable = /\u0000|\p{Surrogate}/gu;

/** JSON for a jsonb parameter: without zero characters and halves of characters, which files may hold and PostgreSQL can't store. */
export function toJsonText(value: unknown): string {
  return JSON.stringify(value, (_key, part: unknown) =>
    typeof part === 'string' ? part.replace(unstorable, '') : part,
  );
}

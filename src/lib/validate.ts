import type { z } from 'zod';

/** A field's rule from its contract: true, or the first thing that is wrong with it. */
export function ruleOf(schema: z.ZodType, message?: string): (value: unknown) => true | string {
  return (value) => {
    const parsed = schema.safeParse(value);
    if (parsed.success) return true;
    return message ?? parsed.error.issues[0]?.message ?? '';
  };
}

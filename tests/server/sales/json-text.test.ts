import { describe, expect, it } from 'vitest';
import { toJsonText } from '../../../server/features/sales/json-text.ts';

describe('JSON for the database', () => {
  it('drops zero characters and half characters, and nothing else', () => {
    const value = { a: ['x\u0000y', '\ud800 half', 'whole 🍵', '\\u0000 written out'], b: null, c: 1.5 };
    expect(JSON.parse(toJsonText(value))).toEqual({
      a: ['xy', ' half', 'whole 🍵', '\\u0000 written out'],
      b: null,
      c: 1.5,
    });
  });
});

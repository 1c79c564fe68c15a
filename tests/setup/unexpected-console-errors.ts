import { afterEach, beforeEach, expect, vi, type MockInstance } from 'vitest';

let written: string[] = [];
let spy: MockInstance<typeof console.error>;

beforeEach(() => {
  written = [];
  spy = vi.spyOn(console, 'error').mockImplementation((...parts: unknown[]) => {
    written.push(parts.map(String).join(' '));
  });
});

/** A test that expects an error on the console puts its own implementation in place of this one. */
afterEach(() => {
  spy.mockRestore();
  expect(written, 'nothing unexpected is written to console.error').toEqual([]);
});

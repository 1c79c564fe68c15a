import { expect, it } from 'vitest';
import { readNextPage } from '../../../../src/features/accounts/next-page.ts';

it.each([
  ['?next=%2Fplan%2F3%3Fcategory%3D1', '/plan/3?category=1'],
  ['', '/'],
  ['?next=https%3A%2F%2Fevil.example', '/'],
  ['?next=%2F%2Fevil.example', '/'],
  ['?next=%2F%5Cevil.example', '/'],
])('goes on from %s to %s, never to another site', (search, path) => {
  expect(readNextPage(new URLSearchParams(search))).toBe(path);
});

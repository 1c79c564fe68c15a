import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { decimalMarkOf, readFactor, readNumber, readTypedNumber } from '../../../src/features/plan/number-input.ts';

describe('readNumber', () => {
  it.each([
    ['1,234.5', '.', 1234.5],
    ['1.234,5', ',', 1234.5],
    ['1 234,5', ',', 1234.5],
    ['1\u202f234', ',', 1234],
    ['1’234.50', '.', 1234.5],
    ['−91', '.', -91],
    ['(91)', '.', -91],
    ['+840', '.', 840],
    ['.5', '.', 0.5],
    ['12.', '.', 12],
    ['0', ',', 0],
  ] as const)('reads %s with %s as %d', (text, mark, value) => {
    expect(readNumber(text, mark)).toBe(value);
  });

  it.each(['', 'abc', '1,23', '12,34,567', '1.2.3', '--5', '(-5)', '5 pcs', '1e5', '.'])(
    'refuses %s with a decimal point',
    (text) => {
      expect(readNumber(text, '.')).toBeNull();
    },
  );

  it('reads back whatever a locale writes', () => {
    fc.assert(
      fc.property(
        fc.integer({ min: -100_000_000, max: 100_000_000 }),
        fc.constantFrom('en-GB', 'de-DE', 'fr-FR', 'de-CH', 'pl-PL'),
        (hundredths, locale) => {
          const value = hundredths / 100;
          const text = new Intl.NumberFormat(locale, { maximumFractionDigits: 2 }).format(value);
          expect(readNumber(text, decimalMarkOf(locale))).toBeCloseTo(value, 10);
        },
      ),
    );
  });
});

describe('readTypedNumber', () => {
  it('prefers the person’s own reading', () => {
    expect(readTypedNumber('1.234', ',')).toBe(1234);
    expect(readTypedNumber('1.234', '.')).toBe(1.234);
  });

  it('takes the other mark where only that makes sense', () => {
    expect(readTypedNumber('12.50', ',')).toBe(12.5);
    expect(readTypedNumber('12,5', '.')).toBe(12.5);
  });
});

describe('readFactor', () => {
  it.each([
    ['1.05', 1.05],
    ['105 %', 1.05],
    ['105%', 1.05],
    ['+5 %', 1.05],
    ['-5%', 0.95],
    ['−12.5 %', 0.875],
    ['0', 0],
  ])('reads %s as %d', (text, factor) => {
    expect(readFactor(text, '.')).toBe(factor);
  });

  it('refuses what is no number', () => {
    expect(readFactor('%', '.')).toBeNull();
    expect(readFactor('five %', '.')).toBeNull();
  });
});

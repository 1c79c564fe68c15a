import fc from 'fast-check';
import { expect, test } from 'vitest';
import { findTicksPerUnit, greatestCommonDivisor, spreadInSteps } from '../../../shared/domain/spreading.ts';

const weighted = fc
  .array(fc.integer({ min: 0, max: 10_000 }), { minLength: 1, maxLength: 60 })
  .filter((weights) => weights.some((weight) => weight > 0));

test('parts of equal step add up to the total exactly and lie within one step of the proportional share', () => {
  fc.assert(
    fc.property(
      weighted,
      fc.integer({ min: 0, max: 1_000_000 }),
      fc.integer({ min: 1, max: 12 }),
      (weights, count, step) => {
        const total = count * step;
        const steps = weights.map(() => step);
        const { parts, left } = spreadInSteps(total, weights, steps);
        const weightTotal = weights.reduce((sum, weight) => sum + weight, 0);
        expect(left).toBe(0);
        expect(parts.reduce((sum, part) => sum + part, 0)).toBe(total);
        parts.forEach((part, index) => {
          expect(part % step).toBe(0);
          expect(Math.abs(part - (total * weights[index]!) / weightTotal)).toBeLessThan(step);
        });
      },
    ),
  );
});

test('a heavier cell never gets less than a lighter one', () => {
  fc.assert(
    fc.property(weighted, fc.integer({ min: 0, max: 100_000 }), (weights, total) => {
      const { parts } = spreadInSteps(
        total,
        weights,
        weights.map(() => 1),
      );
      weights.forEach((weight, index) => {
        weights.forEach((other, at) => {
          if (weight > other) expect(parts[index]).toBeGreaterThanOrEqual(parts[at]!);
        });
      });
    }),
  );
});

test('cells of different steps get multiples of their own step and lose nothing while one of them counts singly', () => {
  fc.assert(
    fc.property(
      fc.array(fc.record({ weight: fc.integer({ min: 0, max: 500 }), step: fc.constantFrom(1, 4, 6, 12) }), {
        minLength: 1,
        maxLength: 20,
      }),
      fc.integer({ min: 0, max: 5_000 }),
      (cells, total) => {
        const all = [{ weight: 1, step: 1 }, ...cells];
        const { parts, left } = spreadInSteps(
          total,
          all.map(({ weight }) => weight),
          all.map(({ step }) => step),
        );
        expect(left).toBe(0);
        expect(parts.reduce((sum, part) => sum + part, 0)).toBe(total);
        parts.forEach((part, index) => expect(part % all[index]!.step).toBe(0));
      },
    ),
  );
});

test('what no step can take is given back', () => {
  expect(spreadInSteps(10, [1, 1], [4, 4])).toEqual({ parts: Float64Array.of(4, 4), left: 2 });
});

test('steps of tenths and quarters are counted in whole ticks', () => {
  expect(findTicksPerUnit([1, 6])).toBe(1);
  expect(findTicksPerUnit([1, 0.1])).toBe(10);
  expect(findTicksPerUnit([0.25])).toBe(100);
  expect(findTicksPerUnit([1 / 3])).toBe(1_000_000);
});

test('the common divisor of steps is the finest total that they can meet', () => {
  expect(greatestCommonDivisor([12, 8])).toBe(4);
  expect(greatestCommonDivisor([7, 5])).toBe(1);
  expect(greatestCommonDivisor([])).toBe(1);
});

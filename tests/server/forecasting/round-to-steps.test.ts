import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { roundToSteps } from '../../../server/forecasting/round-to-steps.ts';

describe('roundToSteps', () => {
  it('keeps every running total within half a step', () => {
    fc.assert(
      fc.property(
        fc.array(fc.double({ min: 0.01, max: 500, noNaN: true }), { minLength: 1, maxLength: 30 }),
        fc.constantFrom(1, 6, 0.1, 12),
        (values, step) => {
          const { rounded, remainder } = roundToSteps(values, step);
          let exact = 0;
          let total = 0;
          values.forEach((value, i) => {
            exact += value;
            total += rounded[i]!;
            expect(Math.abs(total - exact)).toBeLessThanOrEqual(step / 2 + 1e-9);
          });
          expect(remainder).toBeCloseTo(exact - total, 6);
        },
      ),
    );
  });

  it('carries the remainder of an earlier stretch', () => {
    expect([...roundToSteps([0.4, 0.4], 1, 0.4).rounded]).toEqual([1, 0]);
  });

  it('leaves unlisted weeks at 0', () => {
    expect([...roundToSteps([0.4, 0, 0.4], 1, 0.4).rounded]).toEqual([1, 0, 0]);
  });

  it('refuses a step of 0 and values that are no numbers', () => {
    expect(() => roundToSteps([1], 0)).toThrow(RangeError);
    expect(() => roundToSteps([Number.NaN], 1)).toThrow(RangeError);
  });
});

import { describe, expect, it } from 'vitest';
import { describeEvidence, weighOwnEvidence } from '../../../../server/forecasting/diagnosis/own-evidence.ts';

describe('own evidence', () => {
  it('is the textbook weight τ² / (τ² + σ² / Σx²) of a random slope', () => {
    // One column per item; σ² = 1 / weight, τ² = 1 / penalty.
    const x = [1, -1, 2, -2, 0.5, -0.5];
    const itemOf = Int32Array.from([0, 0, 0, 0, 1, 1]);
    const design = Float64Array.from(x.flatMap((value, i) => (itemOf[i] === 0 ? [value, 0] : [0, value])));
    const weight = 4;
    const weights = new Float64Array(6).fill(weight);
    const penalties = Float64Array.from([5, 5]);
    const own = weighOwnEvidence({ design, columns: 2, weights, penalties }, itemOf, [[0], [1]]);
    expect(own.get(0)).toBeCloseTo(1 / 5 / (1 / 5 + 1 / weight / 10), 12);
    expect(own.get(1)).toBeCloseTo(1 / 5 / (1 / 5 + 1 / weight / 0.5), 12);
  });

  it('falls where an item’s two columns move together', () => {
    const together = Float64Array.from([1, 1, -1, -1, 2, 2, -2, -2]);
    const apart = Float64Array.from([1, 1, -1, -1, 1, -1, -1, 1]);
    const weigh = (design: Float64Array): number =>
      weighOwnEvidence(
        { design, columns: 2, weights: new Float64Array(4).fill(1), penalties: Float64Array.from([1, 1]) },
        new Int32Array(4),
        [[0, 1]],
      ).get(0)!;
    expect(weigh(together)).toBeLessThan(0.5);
    expect(weigh(apart)).toBeGreaterThan(0.7);
  });

  it('counts items without a slope of their own as the line’s evidence, and leaves out what was never fitted', () => {
    const evidence = describeEvidence(
      [
        { name: 'a', column: 0, slope: -1 },
        { name: 'b', column: null, slope: -2 },
        { name: 'c', column: 1, slope: -3 },
        { name: 'd', column: null, slope: Number.NaN },
      ],
      new Map([
        [0, 0.9],
        [1, 0.6],
      ]),
    );
    expect(evidence).toEqual({
      own: 0.5,
      withOwnSlope: 2,
      members: 3,
      lowest: { name: 'c', slope: -3 },
      highest: { name: 'a', slope: -1 },
    });
  });

  it('isn’t spoken of where all items share one slope', () => {
    const members = [
      { name: 'a', column: null, slope: 1 },
      { name: 'b', column: null, slope: 1 },
    ];
    expect(describeEvidence(members, new Map())).toBeNull();
    expect(describeEvidence([{ name: 'a', column: 0, slope: 1 }], new Map([[0, 1]]))).toBeNull();
  });
});

/**
 * Spreads a total over cells in unit steps. Everything is counted in ticks, whole numbers of which every unit step is a multiple,
 * so that sums are exact also for steps such as 0.1.
 */

const finestTicksPerUnit = 1_000_000;

/** Smallest power of ten (at most a million) that makes every step a whole number of ticks; steps finer than that are rounded to it. */
export function findTicksPerUnit(unitSteps: readonly number[]): number {
  let ticksPerUnit = 1;
  for (const step of unitSteps) {
    while (
      ticksPerUnit < finestTicksPerUnit &&
      Math.abs(step * ticksPerUnit - Math.round(step * ticksPerUnit)) > 1e-9
    ) {
      ticksPerUnit *= 10;
    }
  }
  return ticksPerUnit;
}

/** Greatest common divisor of positive whole numbers; 1 of none. */
export function greatestCommonDivisor(values: Iterable<number>): number {
  let divisor = 0;
  for (const value of values) {
    let [a, b] = [value, divisor];
    while (b !== 0) [a, b] = [b, a % b];
    divisor = a;
    if (divisor === 1) break;
  }
  return divisor === 0 ? 1 : divisor;
}

/**
 * Shares `total` (ticks, ≥ 0) out in proportion to `weights` (≥ 0, not all 0), each part a whole multiple of its step (ticks > 0), by largest
 * remainders: every cell gets its share rounded down, then those with the largest remainders (of equals the heavier, then the earlier) one step more.
 * What is smaller than the steps of the weighted cells goes to the first cells whose step takes it.
 * Returns the parts and what no step could take (0 wherever the steps are equal and divide the total).
 */
export function spreadInSteps(
  total: number,
  weights: ArrayLike<number>,
  steps: ArrayLike<number>,
): { parts: Float64Array; left: number } {
  const count = weights.length;
  const parts = new Float64Array(count);
  const remainders = new Float64Array(count);
  let weightTotal = 0;
  for (let i = 0; i < count; i++) weightTotal += weights[i]!;
  let left = total;
  for (let i = 0; i < count; i++) {
    const quota = (total * weights[i]!) / weightTotal / steps[i]!;
    const whole = Math.floor(quota);
    parts[i] = whole * steps[i]!;
    remainders[i] = quota - whole;
    left -= parts[i]!;
  }
  if (left === 0) return { parts, left };
  const order = Array.from({ length: count }, (_, index) => index)
    .filter((index) => weights[index]! > 0)
    .sort((a, b) => remainders[b]! - remainders[a]! || weights[b]! - weights[a]! || a - b);
  // A quota just below a whole number may have been computed as that number, and its part be a step too large.
  for (let i = order.length - 1; i >= 0 && left < 0; i--) {
    const index = order[i]!;
    if (parts[index]! < steps[index]!) continue;
    parts[index]! -= steps[index]!;
    left += steps[index]!;
  }
  for (const index of order) {
    if (left <= 0) break;
    if (steps[index]! > left) continue;
    parts[index]! += steps[index]!;
    left -= steps[index]!;
  }
  for (let i = 0; i < count; i++) if (!(weights[i]! > 0)) order.push(i);
  for (let isTaken = true; left > 0 && isTaken;) {
    isTaken = false;
    for (const index of order) {
      if (steps[index]! > left) continue;
      parts[index]! += steps[index]!;
      left -= steps[index]!;
      isTaken = true;
    }
  }
  return { parts, left };
}

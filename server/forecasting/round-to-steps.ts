/**
 * Rounds a series to whole multiples of `unitStep`, carrying each week's remainder to the next week, so that every running
 * total stays within half a step of the unrounded one. Never below 0; what can't be taken off is carried on.
 * values: units per week in time order. Returns a new array and the remainder left after the last week.
 * Throws RangeError if the step isn't positive or a value isn't finite.
 */
export function roundToSteps(
  values: ArrayLike<number>,
  unitStep: number,
  carriedRemainder = 0,
): { rounded: Float64Array; remainder: number } {
  if (!(unitStep > 0)) throw new RangeError(`unit step must be positive: ${unitStep}`);
  const rounded = new Float64Array(values.length);
  let remainder = carriedRemainder;
  for (let i = 0; i < values.length; i++) {
    const value = values[i]!;
    if (!Number.isFinite(value)) throw new RangeError(`not a number of units: ${value}`);
    const wanted = value + remainder;
    const steps = Math.max(0, Math.round(wanted / unitStep));
    rounded[i] = value === 0 ? 0 : cleanMultiple(steps, unitStep);
    remainder = wanted - rounded[i]!;
  }
  return { rounded, remainder };
}

/** steps × unitStep without the binary tail of steps like 0.1. */
function cleanMultiple(steps: number, unitStep: number): number {
  const inverse = 1 / unitStep;
  return Math.abs(inverse - Math.round(inverse)) < 1e-9 ? steps / Math.round(inverse) : steps * unitStep;
}

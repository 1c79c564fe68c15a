const LOOK_BACK_WEEKS = 8;

/**
 * Regular (shelf) price per week where none is given: the most frequent price paid, to the cent, the higher of ties, among the
 * unpromoted weeks of the week itself and the eight before it. It looks back only, so a later price can't change an earlier one.
 * A regular price stated within those weeks goes before it. A price paid above it in an unpromoted week means that the shelf price has risen: then it is the price paid.
 * price, given: money, NaN = unknown; isPromoted: per week. Weeks before the first known price take the first price known.
 */
export function inferRegularPrice(
  price: Float64Array,
  given: Float64Array,
  isPromoted: ArrayLike<number>,
): { regular: Float64Array; inferredWeeks: number } {
  const weeks = price.length;
  const regular = new Float64Array(weeks).fill(Number.NaN);
  let last = Number.NaN;
  let inferredWeeks = 0;
  let statedAt = -Infinity;
  for (let t = 0; t < weeks; t++) {
    const stated = given[t]!;
    if (stated > 0) {
      last = stated;
      statedAt = t;
    } else {
      const mode = t - statedAt > LOOK_BACK_WEEKS ? modeOfUnpromoted(price, isPromoted, t) : Number.NaN;
      if (mode > 0) last = mode;
      if (price[t]! > 0 && (!isPromoted[t] || Number.isNaN(last)) && !(last >= price[t]!)) last = price[t]!;
      if (price[t]! > 0) inferredWeeks++;
    }
    regular[t] = last;
  }
  const first = regular.find((value) => value > 0) ?? Number.NaN;
  for (let t = 0; t < weeks && Number.isNaN(regular[t]!); t++) regular[t] = first;
  return { regular, inferredWeeks };
}

function modeOfUnpromoted(price: Float64Array, isPromoted: ArrayLike<number>, week: number): number {
  const counts = new Map<number, number>();
  let best = Number.NaN;
  let bestCount = 0;
  for (let t = Math.max(0, week - LOOK_BACK_WEEKS); t <= week; t++) {
    if (!(price[t]! > 0) || isPromoted[t]) continue;
    const cents = Math.round(price[t]! * 100);
    const count = (counts.get(cents) ?? 0) + 1;
    counts.set(cents, count);
    if (count > bestCount || (count === bestCount && cents / 100 > best)) {
      best = cents / 100;
      bestCount = count;
    }
  }
  return best;
}

/** Quantile of sorted values by linear interpolation between order statistics (Hyndman & Fan 1996, type 7). */
export function quantileOfSorted(sorted: Float64Array, probability: number): number {
  const last = sorted.length - 1;
  if (last < 0) return Number.NaN;
  const at = probability * last;
  const low = Math.floor(at);
  const value = sorted[low]!;
  return low >= last ? value : value + (at - low) * (sorted[low + 1]! - value);
}

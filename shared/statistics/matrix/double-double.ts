/** 2²⁷ + 1: Veltkamp's constant, which splits a double into two halves whose products are exact. */
const splitter = 134217729;

/**
 * Σ a·b + start, carried in twice the working precision and rounded once (Ogita, Rump & Oishi 2005, Accurate sum and dot product,
 * algorithm Dot2; exact products by Dekker 1971). a and b are read from their start with a stride, `count` times.
 * Exact products need |a|, |b| below about 1e290.
 */
export function sumProductsAccurately(
  a: Float64Array,
  aStart: number,
  aStride: number,
  b: ArrayLike<number>,
  bStart: number,
  count: number,
  start = 0,
  startLow = 0,
): number {
  let high = start;
  let low = startLow;
  for (let k = 0, p = aStart; k < count; k++, p += aStride) {
    const x = a[p]!;
    const y = b[bStart + k]!;
    const product = x * y;
    let t = splitter * x;
    const xHigh = t - (t - x);
    const xLow = x - xHigh;
    t = splitter * y;
    const yHigh = t - (t - y);
    const yLow = y - yHigh;
    const productError = xLow * yLow - (product - xHigh * yHigh - xLow * yHigh - xHigh * yLow);
    const sum = high + product;
    const part = sum - high;
    low += high - (sum - part) + (product - part) + productError;
    high = sum;
  }
  return high + low;
}

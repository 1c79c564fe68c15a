/**
 * Δ(z) = ln Γ(z) − [(z − ½)·ln z − z + ½·ln 2π] for z > 0, to about 16 digits.
 * Asymptotic series (Abramowitz & Stegun 6.1.41) from z = 12 on, reached from below by Γ(z + 1) = z·Γ(z).
 */
export function computeStirlingRemainder(z: number): number {
  let shift = 0;
  let at = z;
  while (at < 12) {
    // At z < ½ the logarithm of 1 + 1/z is no small number; log1p keeps its digits for every z.
    shift += (at + 0.5) * Math.log1p(1 / at) - 1;
    at += 1;
  }
  const inverse = 1 / at;
  const square = inverse * inverse;
  const series =
    inverse *
    (1 / 12 -
      square *
        (1 / 360 -
          square * (1 / 1260 - square * (1 / 1680 - square * (1 / 1188 - square * (691 / 360360 - square / 156))))));
  return shift + series;
}

/** x − ln(1 + x) for x > −1, without the cancellation near 0; `onePlusX` is given apart so that x near −1 keeps its digits. */
export function computeLogGap(x: number, onePlusX: number): number {
  if (Math.abs(x) > 0.3) return x - Math.log(onePlusX);
  // ln(1 + x) = 2·artanh(s) with s = x / (2 + x), hence x − ln(1 + x) = s·x − 2·(s³/3 + s⁵/5 + …).
  const s = x / (2 + x);
  const square = s * s;
  let power = s * square;
  let sum = 0;
  for (let k = 3; k < 60; k += 2) {
    const term = power / k;
    sum += term;
    if (Math.abs(term) <= Math.abs(sum) * 1e-17) break;
    power *= square;
  }
  return s * x - 2 * sum;
}

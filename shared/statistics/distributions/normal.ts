import { InvalidInputError } from '../errors.ts';
import { computeUpperGamma } from './chi-square.ts';

/** P(Z ≤ z) of the standard normal, with full relative precision in the lower tail. Checked against R's pnorm. */
export function computeNormalCdf(z: number): number {
  const tail = 0.5 * computeUpperGamma(0.5, (z * z) / 2);
  return z <= 0 ? tail : 1 - tail;
}

function evaluate(coefficients: readonly number[], at: number): number {
  let value = 0;
  for (let k = coefficients.length - 1; k >= 0; k--) value = value * at + coefficients[k]!;
  return value;
}

const centre = {
  above: [
    3.387132872796366608, 133.14166789178437745, 1971.5909503065514427, 13731.693765509461125, 45921.953931549871457,
    67265.770927008700853, 33430.575583588128105, 2509.0809287301226727,
  ],
  below: [
    1, 42.313330701600911252, 687.1870074920579083, 5394.1960214247511077, 21213.794301586595867, 39307.89580009271061,
    28729.085735721942674, 5226.495278852854561,
  ],
};
const shoulder = {
  above: [
    1.42343711074968357734, 4.6303378461565452959, 5.7694972214606914055, 3.64784832476320460504,
    1.27045825245236838258, 0.24178072517745061177, 0.0227238449892691845833, 7.7454501427834140764e-4,
  ],
  below: [
    1, 2.05319162663775882187, 1.6763848301838038494, 0.68976733498510000455, 0.14810397642748007459,
    0.0151986665636164571966, 5.475938084995344946e-4, 1.05075007164441684324e-9,
  ],
};
const tail = {
  above: [
    6.6579046435011037772, 5.4637849111641143699, 1.7848265399172913358, 0.29656057182850489123,
    0.026532189526576123093, 0.0012426609473880784386, 2.71155556874348757815e-5, 2.01033439929228813265e-7,
  ],
  below: [
    1, 0.59983220655588793769, 0.13692988092273580531, 0.0148753612908506148525, 7.868691311456132591e-4,
    1.8463183175100546818e-5, 1.4215117583164458887e-7, 2.04426310338993978564e-15,
  ],
};

/** z with P(Z ≤ z) = probability, 0 < probability < 1. Source: Wichura 1988, algorithm AS 241 (PPND16). Checked against R's qnorm. */
export function computeNormalQuantile(probability: number): number {
  if (!(probability > 0 && probability < 1))
    throw new InvalidInputError('a quantile needs a probability between 0 and 1');
  const offset = probability - 0.5;
  if (Math.abs(offset) <= 0.425) {
    const r = 0.180625 - offset * offset;
    return (offset * evaluate(centre.above, r)) / evaluate(centre.below, r);
  }
  const r = Math.sqrt(-Math.log(offset < 0 ? probability : 1 - probability));
  const part = r <= 5 ? shoulder : tail;
  const at = r <= 5 ? r - 1.6 : r - 5;
  const value = evaluate(part.above, at) / evaluate(part.below, at);
  return offset < 0 ? -value : value;
}

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
    3.3871328727963665, 133.14166789178438, 1971.5909503065513, 13731.69376550946, 45921.95393154987, 67265.7709270087,
    33430.57558358813, 2509.0809287301227,
  ],
  below: [
    1, 42.31333070160091, 687.1870074920579, 5394.196021424751, 21213.794301586597, 39307.89580009271,
    28729.085735721943, 5226.495278852854,
  ],
};
const shoulder = {
  above: [
    1.4234371107496835, 4.630337846156546, 5.769497221460691, 3.6478483247632045, 1.2704582524523684,
    0.2417807251774506, 0.022723844989269184, 0.0007745450142783414,
  ],
  below: [
    1, 2.053191626637759, 1.6763848301838038, 0.6897673349851, 0.14810397642748008, 0.015198666563616457,
    0.0005475938084995345, 1.0507500716444169e-9,
  ],
};
const tail = {
  above: [
    6.657904643501103, 5.463784911164114, 1.7848265399172913, 0.29656057182850487, 0.026532189526576124,
    0.0012426609473880784, 2.7115555687434876e-5, 2.0103343992922881e-7,
  ],
  below: [
    1, 0.599832206555888, 0.1369298809227358, 0.014875361290850615, 0.0007868691311456133, 1.8463183175100548e-5,
    1.421511758316446e-7, 2.0442631033899397e-15,
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

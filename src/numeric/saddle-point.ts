/**
 * The two pieces of which Loader's saddle-point form of a density is made; both keep full relative accuracy where the
 * plain form with logarithms of gamma functions loses most of its digits (large shapes, values near the mean).
 * Source: C. Loader 2000, Fast and Accurate Computation of Binomial Probabilities.
 */

/** ½ ln 2π. */
export const LOG_ROOT_TWO_PI = 0.5 * Math.log(2 * Math.PI);

/** From here on the asymptotic series with the terms below is exact to double precision. */
const ASYMPTOTIC_FROM = 15;

/** B(2k) / (2k (2k − 1)): NIST Digital Library of Mathematical Functions, 5.11.1. */
const STIRLING_COEFFICIENTS = [1 / 12, -1 / 360, 1 / 1260, -1 / 1680, 1 / 1188, -691 / 360360, 1 / 156];

/**
 * What Stirling's formula leaves out: ln Γ(x) − (x − ½) ln x + x − ½ ln 2π, for x > 0.
 * Below 15 by stepping upwards: the difference of two neighbours is artanh(v)/v − 1 with v = 1/(2x + 1).
 */
export function stirlingError(x: number): number {
  let sum = 0;
  let at = x;
  for (; at < ASYMPTOTIC_FROM; at++) sum += stirlingStep(at);
  const inverseSquare = 1 / (at * at);
  let tail = 0;
  for (let k = STIRLING_COEFFICIENTS.length - 1; k >= 0; k--) tail = tail * inverseSquare + STIRLING_COEFFICIENTS[k]!;
  return sum + tail / at;
}

function stirlingStep(x: number): number {
  if (x < 1) return (x + 0.5) * (Math.log1p(x) - Math.log(x)) - 1;
  const square = 1 / (2 * x + 1) ** 2;
  let power = square;
  let sum = 0;
  for (let k = 3; power > sum * Number.EPSILON * 0.01; k += 2) {
    sum += power / k;
    power *= square;
  }
  return sum;
}

/**
 * x ln(x/m) + m − x without cancellation, for x ≥ 0 and m > 0.
 * @param difference x − m, where the caller knows it better than by subtraction.
 */
export function devianceTerm(x: number, m: number, difference = x - m): number {
  if (x === 0) return m;
  if (Math.abs(difference) > 0.1 * (x + m)) return x * Math.log(x / m) - difference;
  const v = difference / (x + m);
  let sum = difference * v;
  let power = 2 * x * v;
  for (let k = 3; ; k += 2) {
    power *= v * v;
    const next = sum + power / k;
    if (next === sum) return sum;
    sum = next;
  }
}

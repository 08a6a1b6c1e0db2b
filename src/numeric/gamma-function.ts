import { LOG_ROOT_TWO_PI, stirlingError } from './saddle-point.ts';

/**
 * Natural logarithm of the gamma function, for x > 0. Absolute error near 1e-15 around its zeros 1 and 2, relative
 * error of the same size elsewhere.
 * Source: NIST Digital Library of Mathematical Functions, 5.5.1 and 5.11.1.
 * @throws RangeError for x ≤ 0.
 */
export function logGamma(x: number): number {
  if (x <= 0) throw new RangeError(`logGamma needs an argument above 0, got ${x}`);
  if (x === Number.POSITIVE_INFINITY) return x;
  return (x - 0.5) * Math.log(x) - x + LOG_ROOT_TWO_PI + stirlingError(x);
}

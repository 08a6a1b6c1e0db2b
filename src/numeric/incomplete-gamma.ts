import { continuedFraction } from './continued-fraction.ts';
import { bothTails, type LogTails } from './log-tail.ts';
import { devianceTerm, LOG_ROOT_TWO_PI, stirlingError } from './saddle-point.ts';

/**
 * Logarithms of the regularised incomplete gamma functions P(a, x) and Q(a, x), and of xᵃ e⁻ˣ / Γ(a), which is the
 * gamma density per unit of ln x.
 * @param a shape, above 0 and finite.
 * Source: NIST Digital Library of Mathematical Functions, 8.11.4 (series, below the mean) and 8.9.2 (continued fraction,
 * above it, even part); prefactor after Loader (see saddle-point.ts). Cost: steps grow with √a near the mean.
 */
export function logGammaTails(a: number, x: number): LogTails {
  if (Number.isNaN(x)) return { lnLower: NaN, lnUpper: NaN, lnDensity: NaN };
  if (x <= 0) return { lnLower: -Infinity, lnUpper: 0, lnDensity: -Infinity };
  if (x === Infinity) return { lnLower: 0, lnUpper: -Infinity, lnDensity: -Infinity };
  const lnDensity = 0.5 * Math.log(a) - LOG_ROOT_TWO_PI - devianceTerm(a, x) - stirlingError(a);
  if (x < a + 1) return bothTails('lower', lnDensity + Math.log(lowerSeries(a, x) / a), lnDensity);
  const fraction = continuedFraction(
    (k) => k * (a - k),
    (k) => x - a + (2 * k + 1),
  );
  return bothTails('upper', lnDensity - Math.log(fraction), lnDensity);
}

function lowerSeries(a: number, x: number): number {
  let term = 1;
  let sum = 1;
  for (let k = 1; term > sum * Number.EPSILON * 0.1; k++) {
    term *= x / (a + k);
    sum += term;
  }
  return sum;
}

/** Regularised lower incomplete gamma function P(a, x). @throws RangeError unless a is above 0 and finite. */
export function gammaLower(a: number, x: number): number {
  requireShape(a);
  return Math.exp(logGammaTails(a, x).lnLower);
}

/** Regularised upper incomplete gamma function Q(a, x) = 1 − P(a, x), accurate where it is small. @throws as above. */
export function gammaUpper(a: number, x: number): number {
  requireShape(a);
  return Math.exp(logGammaTails(a, x).lnUpper);
}

function requireShape(a: number): void {
  if (!(a > 0 && a < Infinity)) throw new RangeError(`the shape must be above 0 and finite, got ${a}`);
}

import { continuedFraction } from './continued-fraction.ts';
import { bothTails, type LogTails } from './log-tail.ts';
import { devianceTerm, LOG_ROOT_TWO_PI, stirlingError } from './saddle-point.ts';

/**
 * Logarithms of the regularised incomplete beta function I(x; a, b), of its complement, and of xᵃ yᵇ / B(a, b), which is
 * the beta density per unit of ln(x/y).
 * @param a, b shapes, above 0 and finite.
 * @param x, y with x + y = 1; both are asked for, since one of them is often known better than by subtraction.
 * Source: A. R. DiDonato & A. H. Morris 1992, ACM Trans. Math. Softw. 18, 360–373 (continued fraction; the even part of
 * NIST Digital Library of Mathematical Functions, 8.17.22; recalled from memory, held to 60-digit values by the tests);
 * prefactor after Loader (see saddle-point.ts). Cost: steps grow with the root of the smaller shape near the mean.
 */
export function logBetaTails(a: number, b: number, x: number, y: number): LogTails {
  if (Number.isNaN(x) || Number.isNaN(y)) return { lnLower: NaN, lnUpper: NaN, lnDensity: NaN };
  if (x <= 0) return { lnLower: -Infinity, lnUpper: 0, lnDensity: -Infinity };
  if (y <= 0) return { lnLower: 0, lnUpper: -Infinity, lnDensity: -Infinity };
  const n = a + b;
  /** a − n x, without the cancellation near the mean. */
  const aboveMean = a * y - b * x;
  const exponent = devianceTerm(a, n * x, aboveMean) + devianceTerm(b, n * y, -aboveMean);
  const errors = stirlingError(n) - stirlingError(a) - stirlingError(b);
  const lnDensity = 0.5 * (Math.log(a) + Math.log(b / n)) - LOG_ROOT_TWO_PI - exponent + errors;
  return aboveMean >= 0
    ? bothTails('lower', lnDensity - Math.log(lowerFraction(a, b, x, y)), lnDensity)
    : bothTails('upper', lnDensity - Math.log(lowerFraction(b, a, y, x)), lnDensity);
}

function lowerFraction(a: number, b: number, x: number, y: number): number {
  const aboveMean = a * y - b * x;
  return continuedFraction(
    (m) => ((a + m - 1) / (a + 2 * m - 1)) * ((a + b + m - 1) / (a + 2 * m - 1)) * m * (b - m) * x * x,
    (m) => {
      const last = ((a + m) / (a + 2 * m + 1)) * (aboveMean + 1 + m * (1 + y));
      // Written apart because its share is 0/0 for a = 1.
      return m === 0 ? last : last + m + (m * (b - m) * x) / (a + 2 * m - 1);
    },
  );
}

/** Tails over the logarithm of the odds, z = ln(x/y). */
export function logBetaTailsAtOdds(a: number, b: number, z: number): LogTails {
  return logBetaTails(a, b, 1 / (1 + Math.exp(-z)), 1 / (1 + Math.exp(z)));
}

/** Regularised incomplete beta function I(x; a, b). @throws RangeError unless both shapes are above 0 and finite. */
export function betaLower(a: number, b: number, x: number, y = 1 - x): number {
  requireShapes(a, b);
  return Math.exp(logBetaTails(a, b, x, y).lnLower);
}

/** 1 − I(x; a, b), accurate where it is small. @throws as above. */
export function betaUpper(a: number, b: number, x: number, y = 1 - x): number {
  requireShapes(a, b);
  return Math.exp(logBetaTails(a, b, x, y).lnUpper);
}

function requireShapes(a: number, b: number): void {
  if (!(a > 0 && a < Infinity && b > 0 && b < Infinity)) {
    throw new RangeError(`both shapes must be above 0 and finite, got ${a} and ${b}`);
  }
}

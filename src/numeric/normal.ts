import { chiSquareQuantile, chiSquareUpper, chiSquareUpperQuantile } from './chi-square.ts';
import { requireProbability } from './require-in-range.ts';

/**
 * The standard normal distribution: z² is chi-square with one degree of freedom. Holds to 1e-10 relative, tails down to
 * 1e-300. NaN gives NaN.
 */

/** P(Z ≤ z). */
export function normalLower(z: number): number {
  return normalUpper(-z);
}

/** P(Z > z), accurate where it is small. */
export function normalUpper(z: number): number {
  const tail = chiSquareUpper(z * z, 1) / 2;
  return z < 0 ? 1 - tail : tail;
}

/** The z with P(Z ≤ z) = p; −∞ and ∞ for 0 and 1. @throws RangeError for p outside 0 to 1. */
export function normalQuantile(p: number): number {
  requireProbability(p);
  return p < 0.5 ? -normalUpperQuantile(p) : normalUpperQuantile(1 - p);
}

/** The z with P(Z > z) = p; keeps its digits for the smallest p. @throws RangeError for p outside 0 to 1. */
export function normalUpperQuantile(p: number): number {
  requireProbability(p);
  if (p > 0.5) return -normalUpperQuantile(1 - p);
  // Near the middle the upper tail is flat; what lies between −z and z is not.
  return Math.sqrt(p <= 0.25 ? chiSquareUpperQuantile(2 * p, 1) : chiSquareQuantile(1 - 2 * p, 1));
}

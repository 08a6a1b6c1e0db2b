import { logGammaTails } from './incomplete-gamma.ts';
import { type LogTails, solveLower, solveUpper } from './log-tail.ts';
import { requireDof, requireProbability } from './require-in-range.ts';

/**
 * The chi-square distribution. Degrees of freedom are finite, above 0, and may be fractional (an effective number);
 * probabilities and quantiles hold to 1e-10 relative, tails down to 1e-300.
 * Every function throws RangeError for other degrees of freedom or a probability outside 0 to 1; NaN gives NaN.
 * Source: NIST Digital Library of Mathematical Functions, 8.2.4 with x/2 and half the degrees of freedom.
 */

/** P(χ² ≤ x). */
export function chiSquareLower(x: number, dof: number): number {
  requireFiniteDof(dof);
  return Math.exp(logGammaTails(dof / 2, x / 2).lnLower);
}

/** P(χ² > x), accurate where it is small. */
export function chiSquareUpper(x: number, dof: number): number {
  requireFiniteDof(dof);
  return Math.exp(logGammaTails(dof / 2, x / 2).lnUpper);
}

/** The x with P(χ² ≤ x) = p. */
export function chiSquareQuantile(p: number, dof: number): number {
  requireFiniteDof(dof);
  requireProbability(p);
  if (p === 0) return 0;
  if (p === 1) return Infinity;
  return 2 * Math.exp(solveLower(tailsAt(dof), p, Math.log(dof / 2)));
}

/** The x with P(χ² > x) = p; keeps its digits for the smallest p. */
export function chiSquareUpperQuantile(p: number, dof: number): number {
  requireFiniteDof(dof);
  requireProbability(p);
  if (p === 0) return Infinity;
  if (p === 1) return 0;
  return 2 * Math.exp(solveUpper(tailsAt(dof), p, Math.log(dof / 2)));
}

function tailsAt(dof: number): (z: number) => LogTails {
  return (z) => logGammaTails(dof / 2, Math.exp(z));
}

function requireFiniteDof(dof: number): void {
  requireDof(dof);
  if (dof === Infinity) throw new RangeError('chi-square needs a finite number of degrees of freedom');
}

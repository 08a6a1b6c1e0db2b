import { chiSquareLower, chiSquareQuantile, chiSquareUpper, chiSquareUpperQuantile } from './chi-square.ts';
import { logBetaTails, logBetaTailsAtOdds } from './incomplete-beta.ts';
import { type LogTails, solveLower } from './log-tail.ts';
import { requireDof, requireProbability } from './require-in-range.ts';

/**
 * The F distribution: ratio of two mean squares. Degrees of freedom are above 0, may be fractional, and may be infinite
 * (a variance known exactly). Holds to 1e-10 relative for up to 1e6 degrees of freedom, tails down to 1e-300.
 * Every function throws RangeError for other degrees of freedom or a probability outside 0 to 1; NaN gives NaN.
 * Source: NIST Digital Library of Mathematical Functions, 8.17 with x = d1 f / (d1 f + d2), a = d1/2, b = d2/2.
 */

/** P(F ≤ f). */
export function fLower(f: number, dof1: number, dof2: number): number {
  requireDof(dof1);
  requireDof(dof2);
  if (f <= 0) return 0;
  if (dof1 === Infinity && dof2 === Infinity) return f < 1 ? 0 : 1;
  if (dof2 === Infinity) return chiSquareLower(dof1 * f, dof1);
  if (dof1 === Infinity) return chiSquareUpper(dof2 / f, dof2);
  return Math.exp(tailsOfF(f, dof1, dof2).lnLower);
}

/** P(F > f), accurate where it is small. */
export function fUpper(f: number, dof1: number, dof2: number): number {
  requireDof(dof1);
  requireDof(dof2);
  if (f <= 0) return 1;
  if (dof1 === Infinity && dof2 === Infinity) return f < 1 ? 1 : 0;
  if (dof2 === Infinity) return chiSquareUpper(dof1 * f, dof1);
  if (dof1 === Infinity) return chiSquareLower(dof2 / f, dof2);
  return Math.exp(tailsOfF(f, dof1, dof2).lnUpper);
}

/** The f with P(F ≤ f) = p. */
export function fQuantile(p: number, dof1: number, dof2: number): number {
  requireDof(dof1);
  requireDof(dof2);
  requireProbability(p);
  if (p === 0) return 0;
  if (p === 1) return Infinity;
  if (dof1 === Infinity && dof2 === Infinity) return 1;
  if (dof2 === Infinity) return chiSquareQuantile(p, dof1) / dof1;
  if (dof1 === Infinity) return dof2 / chiSquareUpperQuantile(p, dof2);
  return (dof2 / dof1) * Math.exp(solveLower(tailsAtOdds(dof1, dof2), p, Math.log(dof1 / dof2)));
}

/** The f with P(F > f) = p; keeps its digits for the smallest p. */
export function fUpperQuantile(p: number, dof1: number, dof2: number): number {
  return 1 / fQuantile(p, dof2, dof1);
}

function tailsOfF(f: number, dof1: number, dof2: number): LogTails {
  const odds = (dof1 / dof2) * f;
  const inverse = 1 / odds;
  return odds < 1
    ? logBetaTails(dof1 / 2, dof2 / 2, odds / (1 + odds), 1 / (1 + odds))
    : logBetaTails(dof1 / 2, dof2 / 2, 1 / (1 + inverse), inverse / (1 + inverse));
}

function tailsAtOdds(dof1: number, dof2: number): (z: number) => LogTails {
  return (z) => logBetaTailsAtOdds(dof1 / 2, dof2 / 2, z);
}

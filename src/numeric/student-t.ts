import { logGamma } from './gamma-function.ts';
import { logBetaTails, logBetaTailsAtOdds } from './incomplete-beta.ts';
import { solveLogTail } from './log-tail.ts';
import { normalUpper, normalUpperQuantile } from './normal.ts';
import { requireDof, requireProbability } from './require-in-range.ts';

/**
 * Student's t distribution. Degrees of freedom are above 0, may be fractional (Welch–Satterthwaite), and may be infinite
 * (the normal distribution). Holds to 1e-10 relative, tails down to 1e-300.
 * Every function throws RangeError for other degrees of freedom or a probability outside 0 to 1; NaN gives NaN.
 * Source: NIST Digital Library of Mathematical Functions, 8.17: t²/ν are the odds of a beta variable with shapes ½, ν/2.
 */

/** Beyond this many √ν the first term of the tail's expansion in ν/t² is exact to double precision. */
const FAR = 1e20;

/** P(T ≤ t). */
export function studentLower(t: number, dof: number): number {
  return studentUpper(-t, dof);
}

/** P(T > t), accurate where it is small. */
export function studentUpper(t: number, dof: number): number {
  requireDof(dof);
  if (dof === Infinity) return normalUpper(t);
  const tail = twoTails(Math.abs(t), dof) / 2;
  return t < 0 ? 1 - tail : tail;
}

/** P(|T| > |t|): the usual two-sided p value. */
export function studentTwoSided(t: number, dof: number): number {
  return 2 * studentUpper(Math.abs(t), dof);
}

/** The t with P(T ≤ t) = p; −∞ and ∞ for 0 and 1. */
export function studentQuantile(p: number, dof: number): number {
  requireProbability(p);
  return p < 0.5 ? -studentUpperQuantile(p, dof) : studentUpperQuantile(1 - p, dof);
}

/** The t with P(T > t) = p; keeps its digits for the smallest p. */
export function studentUpperQuantile(p: number, dof: number): number {
  requireDof(dof);
  requireProbability(p);
  if (dof === Infinity) return normalUpperQuantile(p);
  if (p === 0) return Infinity;
  if (p > 0.5) return -studentUpperQuantile(1 - p, dof);
  if (p === 0.5) return 0;
  const far = Math.exp((logFarFactor(dof) - Math.log(2 * p)) / dof);
  if (far > FAR) return Math.sqrt(dof) * far;
  // Near the middle the upper tail is flat; what lies between −t and t is not.
  const [side, tail] = p <= 0.25 ? (['upper', 2 * p] as const) : (['lower', 1 - 2 * p] as const);
  const z = solveLogTail((at) => logBetaTailsAtOdds(0.5, dof / 2, at), side, tail, -Math.log(dof));
  return Math.sqrt(dof) * Math.exp(z / 2);
}

/**
 * Coverage factor k: the interval ±k u holds the share `coverage` of a t distribution. Fractional degrees of freedom are
 * used as they are, neither truncated nor rounded. Source: JCGM 100:2008, G.3.2.
 */
export function coverageFactor(coverage: number, dof: number): number {
  return studentUpperQuantile((1 - coverage) / 2, dof);
}

/** Coverage factors of one coverage, remembered by degrees of freedom: a table of responses asks for the same few many times. */
export function coverageFactors(coverage: number): (dof: number) => number {
  const remembered = new Map<number, number>();
  return (dof) => {
    // Degrees of freedom that differ in their last digits only are the same: 24 bits change k by less than 1e-7 of it.
    const rounded = Math.fround(dof);
    let factor = remembered.get(rounded);
    if (factor === undefined) {
      factor = coverageFactor(coverage, rounded);
      remembered.set(rounded, factor);
    }
    return factor;
  };
}

function twoTails(t: number, dof: number): number {
  const root = t / Math.sqrt(dof);
  if (root > FAR) return Math.exp(logFarFactor(dof) - dof * Math.log(root));
  const odds = (t * t) / dof;
  return Math.exp(logBetaTails(0.5, dof / 2, odds / (1 + odds), 1 / (1 + odds)).lnUpper);
}

/** ln of the factor before (t/√ν)^−ν in the far tail: 2 / (ν B(½, ν/2)). */
function logFarFactor(dof: number): number {
  const a = dof / 2;
  return logGamma(a + 0.5) - logGamma(a) - 0.5 * Math.log(Math.PI) - Math.log(a);
}

/** Natural logarithms of both tails of a distribution at one point. */
export interface LogTails {
  readonly lnLower: number;
  readonly lnUpper: number;
  /** Of the density per unit of the solving variable (logarithm of the value, or of the odds). */
  readonly lnDensity: number;
}

export type Side = 'lower' | 'upper';

/** The solving variable is a logarithm: exp of anything beyond leaves double precision. */
const SEARCH_LIMIT = 760;

/** Newton doubles the digits of every step: after one below this, what remains is below 1e-14. */
const LAST_STEP = 1e-9;

/** Further than this from its target a logarithm has too few digits left for a slope: bisect. */
const FAR_OFF = 1e5;

/** Bisection alone would need about 80. */
const MOST_STEPS = 200;

/** The smaller tail is computed, the other follows from it. */
export function bothTails(side: Side, ln: number, lnDensity: number): LogTails {
  // Rounding may lift a tail above 1 by an epsilon.
  const tail = Math.min(ln, 0);
  const rest = tail > -Math.LN2 ? Math.log(-Math.expm1(tail)) : Math.log1p(-Math.exp(tail));
  return side === 'lower' ? { lnLower: tail, lnUpper: rest, lnDensity } : { lnLower: rest, lnUpper: tail, lnDensity };
}

/**
 * Where a tail has the probability `p`: Newton's method on the logarithm of the tail, kept inside a shrinking bracket
 * (bisected where a step leaves it). Give the smaller of the two tails; the larger one is flat where it nears 1.
 * @param tailsAt tails over a variable z, a logarithm.
 * @param p above 0, below 1.
 * @returns z.
 * Source: safeguarded Newton, Press et al., Numerical Recipes, 3rd ed., 9.4 (idea only).
 */
export function solveLogTail(tailsAt: (z: number) => LogTails, side: Side, p: number, start: number): number {
  const target = Math.log(p);
  const sign = side === 'lower' ? 1 : -1;
  let low = -SEARCH_LIMIT;
  let high = SEARCH_LIMIT;
  let z = start;
  for (let i = 0; i < MOST_STEPS; i++) {
    const { lnLower, lnUpper, lnDensity } = tailsAt(z);
    const ln = side === 'lower' ? lnLower : lnUpper;
    const step = Math.abs(ln - target) < FAR_OFF ? (target - ln) / (sign * Math.exp(lnDensity - ln)) : NaN;
    if (Math.abs(step) < LAST_STEP) return z + step;
    if (sign * (ln - target) > 0) high = z;
    else low = z;
    if (high - low < LAST_STEP * Number.EPSILON) return z;
    z = z + step > low && z + step < high ? z + step : (low + high) / 2;
  }
  // Only the ends of the double range come here: the value is 0 or infinite to working precision.
  return z;
}

/** The same for a lower probability: takes whichever side is the smaller. */
export function solveLower(tailsAt: (z: number) => LogTails, p: number, start: number): number {
  return p <= 0.5 ? solveLogTail(tailsAt, 'lower', p, start) : solveLogTail(tailsAt, 'upper', 1 - p, start);
}

/** The same for an upper probability. */
export function solveUpper(tailsAt: (z: number) => LogTails, p: number, start: number): number {
  return p <= 0.5 ? solveLogTail(tailsAt, 'upper', p, start) : solveLogTail(tailsAt, 'lower', 1 - p, start);
}

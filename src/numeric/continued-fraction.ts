/** Slowest case met: shapes of 5e8 close to the mean, some ten thousand steps. */
const MOST_STEPS = 10_000_000;

/** Keeps a vanishing denominator from stopping the recurrence. */
const TINY = 1e-300;

/**
 * b(0) + a(1)/(b(1) + a(2)/(b(2) + …)), by the modified Lentz method.
 * Source: Press et al., Numerical Recipes, 3rd ed., 5.2; Thompson & Barnett 1986, J. Comput. Phys. 64, 490–509.
 * @throws Error where it does not settle: a defect in the caller.
 */
export function continuedFraction(a: (k: number) => number, b: (k: number) => number): number {
  let fraction = b(0) || TINY;
  let c = fraction;
  let d = 0;
  for (let k = 1; k < MOST_STEPS; k++) {
    const numerator = a(k);
    const denominator = b(k);
    d = 1 / (denominator + numerator * d || TINY);
    c = denominator + numerator / c || TINY;
    const change = c * d;
    fraction *= change;
    if (Math.abs(change - 1) <= Number.EPSILON) return fraction;
  }
  throw new Error('a continued fraction did not settle');
}

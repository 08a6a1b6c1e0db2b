import { logGammaTails } from './incomplete-gamma.ts';
import { requireDof } from './require-in-range.ts';
import { devianceTerm, LOG_ROOT_TWO_PI, stirlingError } from './saddle-point.ts';

/**
 * P(χ² > x) for the noncentral chi-square distribution: the chance that a test at the limit `x` sees a misfit of the
 * given noncentrality (Σ (shift/u)² over what the test looks at).
 * @param dof above 0, finite.
 * @param noncentrality 0 (the central distribution) or more.
 * @throws RangeError for other degrees of freedom or noncentralities.
 * Source: Johnson, Kotz & Balakrishnan, Continuous Univariate Distributions, vol. 2, 29.3: central tails mixed with
 * Poisson weights, all of one sign; summed outwards from the largest. Cost: terms grow with √noncentrality.
 */
export function noncentralChiSquareUpper(x: number, dof: number, noncentrality: number): number {
  requireDof(dof);
  if (!(noncentrality >= 0) || noncentrality === Infinity || dof === Infinity) {
    throw new RangeError(
      `need finite degrees of freedom and a noncentrality of 0 or more, got ${dof}, ${noncentrality}`,
    );
  }
  const mean = noncentrality / 2;
  const centralTail = (k: number) => logGammaTails(dof / 2 + k, x / 2).lnUpper;
  if (!(x > 0) || mean === 0) return Math.exp(centralTail(0));
  const term = (k: number) => logPoisson(k, mean) + centralTail(k);

  let peak = Math.floor(mean);
  while (term(peak + 1) > term(peak)) peak++;
  const largest = term(peak);
  let sum = 0;
  for (const direction of [1, -1]) {
    for (let k = direction === 1 ? peak : peak - 1; k >= 0; k += direction) {
      const share = Math.exp(term(k) - largest);
      sum += share;
      if (!(share > sum * Number.EPSILON * 1e-3)) break;
    }
  }
  return Math.min(1, Math.exp(largest + Math.log(sum)));
}

function logPoisson(k: number, mean: number): number {
  if (k === 0) return -mean;
  return -devianceTerm(k, mean) - stirlingError(k) - LOG_ROOT_TWO_PI - 0.5 * Math.log(k);
}

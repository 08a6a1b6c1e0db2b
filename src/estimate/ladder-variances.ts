import type { NestedAnova, SquaredTraces } from '../numeric/nested-anova.ts';
import { nestedReml } from '../numeric/nested-reml.ts';
import type { NestedVariances } from '../numeric/nested-rows.ts';
import type { MeanSquare } from '../numeric/variance-interval.ts';
import type { BandStrata, Stratum } from './band-strata.ts';

/** Mean squares below the square of this many decibels are rounding. */
const ROUNDING = 1e-9;
/** Part of the total variance that an iteration starts from where a step shows nothing: from 0 it might not leave. */
const START_ABOVE_ZERO = 1e-3;

/** Expected mean squares of a band: how many times each variance is in them (within is in all of them once). */
export interface Shares {
  readonly innerOfInner: number;
  readonly outerOfOuter: number;
  /** Weight of the inner mean square in the combination that, but for the outer variance, is expected as the outer one is. */
  readonly innerWeight: number;
}

export function sharesOf({ strata, innerOfInner, outerOfInner, outerOfOuter }: BandStrata): Shares {
  const inInner = innerOfInner / strata.inner.dof;
  return {
    innerOfInner: inInner,
    outerOfOuter: outerOfOuter / strata.outer.dof,
    innerWeight: strata.within.dof > 0 ? outerOfInner / strata.outer.dof / inInner : 1,
  };
}

export function meanSquare({ strata }: BandStrata, stratum: Stratum): number {
  const value = strata[stratum].sumOfSquares / strata[stratum].dof;
  return value < ROUNDING ** 2 ? 0 : value;
}

/**
 * The mean square that the outer one is to be held against, with Satterthwaite's degrees of freedom.
 * Source: Satterthwaite 1946, Biometrics Bulletin 2, 110–114.
 */
export function squareBelow(
  inner: MeanSquare | undefined,
  within: MeanSquare | undefined,
  { innerWeight }: Shares,
): MeanSquare | undefined {
  if (inner === undefined || within === undefined) return inner ?? within;
  const parts = [innerWeight * inner.value, (1 - innerWeight) * within.value] as const;
  // A weight above 1 takes within away; what is left is not let fall below both.
  const value = Math.max(parts[0] + parts[1], Math.min(inner.value, within.value));
  const spread = parts[0] ** 2 / inner.dof + parts[1] ** 2 / within.dof;
  return { value, dof: spread > 0 ? value ** 2 / spread : inner.dof };
}

/**
 * Variances of a band, 0 for a step that it cannot show: by expected mean squares, and where groups are unequal then by
 * restricted maximum likelihood. A step holds what is below it and cannot be told from it.
 */
export function bandVariances(band: BandStrata, shares: Shares): { variances: NestedVariances; byLikelihood: boolean } {
  const has = (stratum: Stratum) => band.strata[stratum].dof > 0;
  const within = has('within') ? meanSquare(band, 'within') : 0;
  const inner = has('inner') ? Math.max(0, meanSquare(band, 'inner') - within) / shares.innerOfInner : 0;
  const below = squareBelow(
    has('inner') ? { value: meanSquare(band, 'inner'), dof: 1 } : undefined,
    has('within') ? { value: within, dof: 1 } : undefined,
    shares,
  );
  const testable = has('outer') && below !== undefined;
  const outer = testable ? Math.max(0, meanSquare(band, 'outer') - below.value) / shares.outerOfOuter : 0;
  const analysed = { outer, inner, within };
  const residual = has('within') ? within : inner;
  if (band.parts.length === 0 || below === undefined || residual === 0)
    return { variances: analysed, byLikelihood: false };

  const least = START_ABOVE_ZERO * (outer + inner + within);
  const fit = nestedReml(band.parts, {
    outer: testable ? Math.max(outer, least) : undefined,
    inner: has('within') && has('inner') ? Math.max(inner, least) : undefined,
    within: residual,
  });
  if (!fit.converged) return { variances: analysed, byLikelihood: false };
  const found = fit.variances;
  return {
    variances: {
      outer: testable ? found.outer : 0,
      // Without repeats the readings' own variance is the reseat step, repeat included.
      inner: !has('within') ? found.within / shares.innerOfInner : has('inner') ? found.inner : 0,
      within: has('within') ? found.within : 0,
    },
    byLikelihood: true,
  };
}

/**
 * By what factor the degrees of freedom of a stratum shrink, as unequal groups give its parts unequal variances:
 * tr(A V)² / (d tr((A V)²)), 1 for a balanced design. From the analysis that most frequencies share.
 * Source: Box 1954, Ann. Math. Statist. 25, 290–302, theorem 3.1 (recalled from memory).
 */
export function equality(
  stratum: Stratum,
  { outer, inner, within }: NestedVariances,
  anova: NestedAnova,
  traces: SquaredTraces,
): number {
  if (stratum === 'within') return 1;
  const dof = anova.dof[stratum];
  const [ofOuter, ofInner] =
    stratum === 'inner' ? [0, anova.innerOfInner] : [outer * anova.outerOfOuter, anova.outerOfInner];
  const trace = ofOuter + inner * ofInner + within * dof;
  const squares =
    stratum === 'inner'
      ? inner ** 2 * traces.innerInner
      : outer ** 2 * traces.outerOuter + inner ** 2 * traces.outerInner + 2 * outer * inner * traces.outerCross;
  const spread = squares + 2 * within * (ofOuter + inner * ofInner) + within ** 2 * dof;
  return trace > 0 ? Math.min(1, trace ** 2 / (dof * spread)) : 1;
}

import { fUpper } from '../numeric/f-distribution.ts';
import type { NestedAnova, SquaredTraces } from '../numeric/nested-anova.ts';
import type { NestedVariances } from '../numeric/nested-rows.ts';
import { differenceInterval, type MeanSquare, varianceInterval } from '../numeric/variance-interval.ts';
import { type BandStrata, type Stratum, worthOfFrequencies } from './band-strata.ts';
import { bandVariances, equality, meanSquare, sharesOf, squareBelow } from './ladder-variances.ts';
import { type LadderStep, NOT_TESTABLE, type ScatterStep, type StepScatter } from './scatter-step.ts';

/** A band of the ladder before the verdict, which needs all bands. */
export type Rungs = Omit<ScatterStep, 'from' | 'to' | 'verdict'>;

/**
 * Standard deviations, intervals and F tests of one band.
 * Estimates: see `bandVariances`. Intervals: chi-square for the lowest step that is seen, the modified large-sample
 * interval for those above it. Tests: mean square of a step against that of the step below; where unequal groups give the
 * two different shares of reseat, against the combination of mean squares that has the same share.
 * Degrees of freedom count of neighbouring frequencies only what is independent. Those of a test rest on the correlation
 * in both strata together, which is the same in both where there is nothing to find.
 * @param tracesOf asked for only where groups are unequal.
 */
export function ladderRungs(
  band: BandStrata,
  tracesOf: (anova: NestedAnova) => SquaredTraces,
  coverage: number,
): Rungs {
  const has = (stratum: Stratum) => band.strata[stratum].dof > 0;
  const shares = sharesOf(band);
  const { variances, byLikelihood } = bandVariances(band, shares);
  const dofOf = (stratum: Stratum, correlationFrom: readonly Stratum[], assumed: NestedVariances) =>
    band.strata[stratum].dof *
    worthOfFrequencies(band, correlationFrom) *
    (band.balanced || band.main === undefined ? 1 : equality(stratum, assumed, band.main, tracesOf(band.main)));

  const own = (stratum: Stratum, value: number): MeanSquare | undefined =>
    has(stratum) ? { value, dof: dofOf(stratum, [stratum], variances) } : undefined;
  const within = own('within', variances.within);
  const inner = own('inner', variances.within + shares.innerOfInner * variances.inner);
  const below = squareBelow(inner, within, shares);
  const outer = below === undefined ? undefined : own('outer', below.value + shares.outerOfOuter * variances.outer);

  const test = (upper: Stratum, lower: Stratum, assumed: NestedVariances) => {
    const found = (stratum: Stratum, correlationFrom: readonly Stratum[]): MeanSquare | undefined =>
      has(stratum) ? { value: meanSquare(band, stratum), dof: dofOf(stratum, correlationFrom, assumed) } : undefined;
    const above = found(upper, [upper, lower]);
    const against =
      upper === 'outer' && lower === 'inner'
        ? squareBelow(found('inner', [upper, lower]), found('within', ['within']), shares)
        : found(lower, [upper, lower]);
    return fTest(above, against);
  };
  const reseat = test('inner', 'within', { ...variances, inner: 0, outer: 0 });
  const partner = test('outer', has('inner') ? 'inner' : 'within', { ...variances, outer: 0 });
  return {
    repeat: stepOf(within, undefined, 1, coverage, []),
    reseat: stepOf(inner, within, shares.innerOfInner, coverage, within === undefined ? ['repeat'] : []),
    partner: stepOf(outer, below, shares.outerOfOuter, coverage, inner === undefined ? ['reseat'] : []),
    fReseat: reseat.f,
    pReseat: reseat.p,
    fPartner: partner.f,
    pPartner: partner.p,
    partnerAgainst: outer === undefined ? undefined : inner === undefined ? 'repeat' : 'reseat',
    method:
      below === undefined ? undefined : byLikelihood ? 'restricted maximum likelihood' : 'nested analysis of variance',
  };
}

function stepOf(
  above: MeanSquare | undefined,
  below: MeanSquare | undefined,
  share: number,
  coverage: number,
  includes: readonly LadderStep[],
): StepScatter {
  if (above === undefined) return NOT_TESTABLE;
  const interval = below === undefined ? varianceInterval(above, coverage) : differenceInterval(above, below, coverage);
  const variance = above.value - (below?.value ?? 0);
  const spread = above.value ** 2 / above.dof + (below === undefined ? 0 : below.value ** 2 / below.dof);
  return {
    sd: Math.sqrt(variance / share),
    dof: variance > 0 ? variance ** 2 / spread : above.dof,
    low: Math.sqrt(interval.low / share),
    high: Math.sqrt(interval.high / share),
    includes,
  };
}

// Where the step below shows no scatter at all, any scatter above it stands out: F is then infinite.
function fTest(above: MeanSquare | undefined, against: MeanSquare | undefined): { f: number; p: number } {
  if (above === undefined || against === undefined) return { f: Number.NaN, p: Number.NaN };
  if (against.value > 0) {
    const f = above.value / against.value;
    return { f, p: fUpper(f, above.dof, against.dof) };
  }
  return above.value > 0 ? { f: Number.POSITIVE_INFINITY, p: 0 } : { f: Number.NaN, p: Number.NaN };
}

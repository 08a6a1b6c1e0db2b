import { type BlockSystem, factorBlock } from '../estimate/factor-block.ts';
import { incidenceOf } from '../estimate/incidence.ts';
import { knownLinks } from '../model/find-patterns.ts';
import type { AssumedBand } from './assumed-scatter.ts';
import type { PlannedBench } from './planned-bench.ts';

/** What a design says of its links in one stretch of frequencies. */
export interface PlannedCovariance {
  /** dB², row-major, links of each frequency squared. Rows and columns of open links mean nothing. */
  readonly covariance: Float64Array;
  /** 1 / variance of each chain's mean. */
  readonly chainWeight: Float64Array;
  /** Variance (dB²) of the chain's fitted value. */
  readonly fittedVariance: Float64Array;
}

/** Variance (dB²) that stands for none at all: weights must stay finite. */
const ROUNDING = 1e-12;

/**
 * Covariance of a design's links: (XᵀAX)⁻¹ with a row a chain, under the restraints of what is left open.
 * A chain that is mounted m times with n takes each has a mean of variance q² + s²/m + σ²/(m n), under partner, reseat and
 * repeat variances q², s², σ²; for unequal seatings 1 / Σ 1/(s² + σ²/n) takes the place of the last two.
 * Source: Searle, Casella & McCulloch, Variance Components, 1992, section 7.1 (recalled from memory).
 * @param f index of the frequency, for certificates.
 */
export async function plannedCovariance(
  { model, layout, patterns }: PlannedBench,
  band: Pick<AssumedBand, 'repeat' | 'reseat' | 'partner'>,
  f: number,
): Promise<PlannedCovariance> {
  const chainWeight = Float64Array.from(layout.groups, ({ seatings }) =>
    weightOfChain(
      seatings.map((takes) => takes.length),
      band,
    ),
  );
  const incidence = incidenceOf(
    model,
    layout.groups.map(({ seatings }) => seatings[0]![0]!),
  );
  const priorLinks = knownLinks(model, f);
  const pattern = patterns.patterns[patterns.patternOf[f]!]!;
  const system: BlockSystem = {
    incidence,
    weights: chainWeight,
    priorLinks,
    priorWeights: Float64Array.from(priorLinks, (link) => 1 / model.links[link]!.prior!.uncertainty[f]! ** 2),
    restraints: pattern.separability.directions.map(({ restraint }) => restraint),
    links: model.linksPerFrequency,
    gains: 0,
  };
  let factored = factorBlock(system, undefined);
  // Loaded only when it is needed, as in the solver.
  if (factored.poor) factored = factorBlock(system, (await import('../numeric/rank-revealing.ts')).inverseNormalMatrix);
  const { covariance } = factored;
  const n = model.linksPerFrequency;
  const fittedVariance = Float64Array.from(layout.groups, ({ links, factors }) => {
    let variance = 0;
    links.forEach((one, k) => {
      links.forEach((other, l) => {
        variance += factors[k]! * factors[l]! * covariance[one * n + other]!;
      });
    });
    return variance;
  });
  return { covariance, chainWeight, fittedVariance };
}

/** 1 / variance of the mean of a chain. @param counts takes of each seating. */
export function weightOfChain(
  counts: readonly number[],
  { repeat, reseat, partner }: Pick<AssumedBand, 'repeat' | 'reseat' | 'partner'>,
): number {
  const single = Math.max(ROUNDING, repeat ** 2);
  const precision = counts.reduce((sum, count) => sum + 1 / (reseat ** 2 + single / count), 0);
  return 1 / (partner ** 2 + 1 / precision);
}

/** The weight of one take of a seating, as an independent reading of the same say would have it. */
export function weightOfTake(
  counts: readonly number[],
  seat: number,
  { repeat, reseat, partner }: Pick<AssumedBand, 'repeat' | 'reseat' | 'partner'>,
): number {
  const single = Math.max(ROUNDING, repeat ** 2);
  const weights = counts.map((count) => 1 / (reseat ** 2 + single / count));
  const precision = weights.reduce((sum, weight) => sum + weight, 0);
  return weights[seat]! / counts[seat]! / (1 + partner ** 2 * precision);
}

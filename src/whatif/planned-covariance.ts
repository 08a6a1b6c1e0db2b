import { type BlockSystem, factorBlock } from '../estimate/factor-block.ts';
import { incidenceOf } from '../estimate/incidence.ts';
import { readingScatter } from '../estimate/reading-scatter.ts';
import type { LevelScatter } from '../estimate/scatter-of-level.ts';
import { withMoreLinks, withSeatingLinks } from '../estimate/shared-seatings.ts';
import type { ReadingUncertainty } from '../estimate/solution.ts';
import { knownLinks } from '../model/find-patterns.ts';
import type { AssumedBand } from './assumed-scatter.ts';
import { knownScatter } from './known-scatter.ts';
import type { PlannedBench } from './planned-bench.ts';

/** What a design says in one stretch of frequencies. */
export interface PlannedCovariance {
  /** Covariance of the links in dB², row-major, links of each frequency squared. Rows and columns of open links mean nothing. */
  readonly covariance: Float64Array;
  /** 1 − leverage of each take. */
  readonly redundancy: Float64Array;
  /** What takes and chains are judged by. */
  readonly scatter: LevelScatter;
}

/** A redundancy below this is rounding, as in a run. */
const UNCHECKED = 1e-9;

/** Nothing is said of readings by themselves: their scatter is known. */
const NO_READING: ReadingUncertainty = {
  source: 'none',
  statement: '',
  values: new Float64Array(0),
  dof: new Float64Array(0),
  bands: [],
};

/**
 * Covariance of a design's links: (XᵀAX)⁻¹ under the restraints of what is left open, with the weights that a run would
 * give its takes. A chain that is mounted m times for itself with n takes each has a mean of variance q² + s²/m + σ²/(m n),
 * under partner, reseat and repeat variances q², s², σ²; a seating that serves several pairs is a link of its own, drawn at
 * random (see `readingScatter`).
 * @param f index of the frequency.
 */
export async function plannedCovariance(bench: PlannedBench, band: AssumedBand, f: number): Promise<PlannedCovariance> {
  const { set, model, layout, patterns } = bench;
  const scatter = knownScatter(bench, band);
  const weighed = readingScatter(set, model, layout, [{ frequencies: [f], scatter }], NO_READING)!;
  const count = weighed.shared.seatings.length;
  const n = model.linksPerFrequency;
  const whole = count === 0 ? model : withSeatingLinks(model, weighed.shared, weighed.sharedDeviation);
  const pattern = withMoreLinks(patterns, count).patterns[patterns.patternOf[f]!]!;
  const width = set.frequencies.length;
  const incidence = incidenceOf(whole, [...set.takes.keys()]);
  const weights = Float64Array.from(set.takes, (_, take) => 1 / weighed.independent[take * width + f]! ** 2);
  const priorLinks = knownLinks(whole, f);
  const system: BlockSystem = {
    incidence,
    weights,
    priorLinks,
    priorWeights: Float64Array.from(priorLinks, (link) => 1 / whole.links[link]!.prior!.uncertainty[f]! ** 2),
    restraints: pattern.separability.directions.map(({ restraint }) => restraint),
    links: n + count,
    gains: 0,
  };
  let factored = factorBlock(system, undefined);
  // Loaded only when it is needed, as in the solver.
  if (factored.poor) factored = factorBlock(system, (await import('../numeric/rank-revealing.ts')).inverseNormalMatrix);
  const wide = factored.covariance;
  const covariance = new Float64Array(n * n);
  for (let i = 0; i < n; i++) covariance.set(wide.subarray(i * (n + count), i * (n + count) + n), i * n);
  const redundancy = weights.map((weight, take) => {
    let variance = 0;
    for (let i = incidence.start[take]!; i < incidence.start[take + 1]!; i++) {
      for (let j = incidence.start[take]!; j < incidence.start[take + 1]!; j++) {
        const entry = wide[incidence.link[i]! * (n + count) + incidence.link[j]!]!;
        variance += incidence.factor[i]! * incidence.factor[j]! * entry;
      }
    }
    const left = 1 - weight * variance;
    return left < UNCHECKED ? 0 : left;
  });
  return { covariance, redundancy, scatter };
}

import type { Solution, UncertaintySource } from '../estimate/solution.ts';
import { type ThirdOctaves, thirdOctaves } from '../estimate/third-octaves.ts';
import type { Model } from '../model/model.ts';
import type { TakeSet } from '../takes/take-set.ts';
import { errorCorrelation, independentInMean } from './error-correlation.ts';
import { type EvenWalk, evenWalks } from './even-walks.ts';
import { type MergedChain, mergedChains } from './merged-chains.ts';

/** One pair of a loop: the mean over its takes, times sign and factor. */
export interface LoopTerm {
  /** Names as in the first of its takes, `N01@clamped` where mounts are told apart. */
  readonly emitter: string;
  readonly receiver: string;
  /** Empty where paths are not told apart. */
  readonly path: string;
  /** Empty where gains of sessions are not told apart. */
  readonly session: string;
  readonly sign: 1 | -1;
  /** How often the pair is walked: 1, or 2 where it joins two odd loops; more only where paths or gains have to cancel. */
  readonly factor: number;
  /** Indices into the takes. */
  readonly takes: readonly number[];
}

/** How well a loop closes in one third-octave band. */
export interface LoopBand {
  /** Hertz. */
  readonly from: number;
  readonly to: number;
  /** Frequencies at which every pair of the loop has a reading, and how many of them count as independent in a mean. */
  readonly frequencies: number;
  readonly independent: number;
  /** Mean of the alternating sum over these frequencies, in dB: 0 whatever the units are. */
  readonly closure: number;
  /** Standard uncertainty of the closure in dB; `uncertaintyOf` says what is in it. NaN where there is none. */
  readonly uncertainty: number;
  /** closure / uncertainty; NaN where there is no uncertainty. */
  readonly standardised: number;
}

/** An even closed walk through the pairs. */
export interface LoopFinding {
  readonly chain: readonly LoopTerm[];
  /** Bands in which the loop closes at one frequency at least, ascending. */
  readonly bands: readonly LoopBand[];
}

export interface LoopFindings {
  /** Independent of each other, in the order in which their last pair joins the bench. */
  readonly loops: readonly LoopFinding[];
  /** Independent sums that must be 0 and are not listed: paths or gains cancel in them, but not along a short walk. */
  readonly leftOut: number;
  /** Further loops of a large set that are not listed. */
  readonly beyondLimit: number;
  /** Whether new seatings and partners are in the uncertainties, or only what moves a reading by itself. */
  readonly uncertaintyOf: 'as seated' | 'all scatter';
  readonly uncertaintySource: UncertaintySource;
}

export interface LoopOptions {
  /** Takes to leave out; none where absent, so that a loop shows the take that does not fit. */
  readonly without?: ReadonlySet<number>;
}

/** All pairs of 40 units once make 740; a reader looks at the worst. */
const MOST_LOOPS = 2000;

/**
 * Closures of independent loops, short ones preferred, per third-octave band. Pair means weigh all takes of a pair alike,
 * so that a reader can redo them. Loops are those of all pairs together; where some were not measured at a frequency, the
 * loops through them do not count there.
 * Cost: loops × pairs in a loop × frequencies, beside `evenWalks`.
 */
export function loopFindings(set: TakeSet, model: Model, solution: Solution, options: LoopOptions = {}): LoopFindings {
  const chains = mergedChains(set, model, options.without ?? new Set());
  const { walks, independent } = evenWalks(chains, MOST_LOOPS);
  const used = new Set(walks.flatMap(({ terms }) => terms.map(({ chain }) => chain)));
  const means = chains.map((chain, c) => (used.has(c) ? pairMean(chain, set, model, solution) : undefined));
  const correlation = errorCorrelation(set, solution.residuals);
  const octaves = thirdOctaves(set.frequencies);
  const missing = independent - walks.length;
  const isLimited = walks.length >= MOST_LOOPS;
  return {
    loops: walks.map((walk) => ({
      chain: walk.terms.map(({ chain, factor }) => termOf(chains[chain]!, factor, set, model)),
      bands: bandsOf(walk, means, octaves, correlation),
    })),
    leftOut: isLimited ? 0 : missing,
    beyondLimit: isLimited ? missing : 0,
    uncertaintyOf: solution.readingUncertainty.source === 'scatter' ? 'all scatter' : 'as seated',
    uncertaintySource: solution.readingUncertainty.source,
  };
}

interface PairMean {
  /** Decibels and dB², a value a frequency; NaN where not measured, or without an uncertainty. */
  readonly level: Float64Array;
  readonly variance: Float64Array;
}

function pairMean({ takes }: MergedChain, set: TakeSet, model: Model, { readingUncertainty }: Solution): PairMean {
  const width = set.frequencies.length;
  const level = new Float64Array(width);
  const variance = new Float64Array(width);
  const counts = new Float64Array(width);
  for (const t of takes) {
    const { known } = model.chains[t]!;
    for (let f = 0; f < width; f++) {
      const own = set.levels[t * width + f]! - (known === undefined ? 0 : known[f]!);
      if (Number.isNaN(own)) continue;
      level[f] = level[f]! + own;
      variance[f] = variance[f]! + readingUncertainty.values[t * width + f]! ** 2;
      counts[f] = counts[f]! + 1;
    }
  }
  for (let f = 0; f < width; f++) {
    level[f] = level[f]! / counts[f]!;
    variance[f] = variance[f]! / counts[f]! ** 2;
  }
  return { level, variance };
}

function bandsOf(
  { terms }: EvenWalk,
  means: readonly (PairMean | undefined)[],
  { bands, bandOf }: ThirdOctaves,
  correlation: number,
): LoopBand[] {
  const sums = new Float64Array(bands.length);
  const variances = new Float64Array(bands.length);
  const counts = new Int32Array(bands.length);
  bandOf.forEach((band, f) => {
    let closure = 0;
    let variance = 0;
    for (const { chain, factor } of terms) {
      closure += factor * means[chain]!.level[f]!;
      variance += factor * factor * means[chain]!.variance[f]!;
    }
    if (Number.isNaN(closure)) return;
    sums[band] = sums[band]! + closure;
    variances[band] = variances[band]! + variance;
    counts[band] = counts[band]! + 1;
  });
  return bands.flatMap(({ from, to }, band) => {
    const frequencies = counts[band]!;
    if (frequencies === 0) return [];
    const independent = independentInMean(correlation, frequencies);
    const closure = sums[band]! / frequencies;
    const uncertainty = Math.sqrt(variances[band]! / frequencies / independent);
    return [{ from, to, frequencies, independent, closure, uncertainty, standardised: closure / uncertainty }];
  });
}

function termOf({ takes, labels }: MergedChain, factor: number, set: TakeSet, model: Model): LoopTerm {
  const { emitter, emitterMount, receiver, receiverMount, path, session } = set.takes[takes[0]!]!;
  const has = (kind: 'path' | 'gain') => labels.some((link) => model.links[link]!.kind === kind);
  return {
    emitter: placed(emitter, emitterMount),
    receiver: placed(receiver, receiverMount),
    path: has('path') ? path : '',
    session: has('gain') ? session : '',
    sign: factor > 0 ? 1 : -1,
    factor: Math.abs(factor),
    takes,
  };
}

function placed(unit: string, mount: string): string {
  return mount === '' ? unit : `${unit}@${mount}`;
}

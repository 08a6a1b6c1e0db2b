import type { Model } from '../model/model.ts';
import { type GroupedProjection, groupedProjection, projectionResiduals } from '../numeric/grouped-projection.ts';
import type { TakeSet } from '../takes/take-set.ts';
import { chainRows } from './chain-rows.ts';
import { type MergedChain, mergedChains } from './merged-chains.ts';

/** Bands, and the band of each frequency as an index into them. */
export interface Bands {
  /** Hertz. */
  readonly bands: readonly { readonly from: number; readonly to: number }[];
  readonly bandOf: Int32Array;
}

/** All frequencies as one band. */
export function wholeRange({ frequencies }: TakeSet): Bands {
  return {
    bands: [{ from: frequencies[0]!, to: frequencies.at(-1)! }],
    bandOf: new Int32Array(frequencies.length),
  };
}

/** Means over the takes of each pair and over the frequencies of a band, with their additive fit. */
export interface PairBand {
  /** Hertz. */
  readonly from: number;
  readonly to: number;
  /** Pairs with a complete take in the band; their takes are the complete ones. */
  readonly chains: readonly MergedChain[];
  /** The same pair has the same number in every band. */
  readonly numbers: readonly number[];
  /** Decibels, an entry a pair. */
  readonly levels: Float64Array;
  readonly fitted: Float64Array;
  readonly residuals: Float64Array;
  readonly projection: GroupedProjection;
  readonly dof: number;
}

/**
 * Pair means per band and what the additive model leaves of them: all pairs weigh the same, all links count
 * as unknown. Takes that miss a frequency of a band are left out of it.
 * Cost: linear in the readings, plus links³ once for each set of pairs that bands have in common.
 */
export function pairBands(set: TakeSet, model: Model, bands: Bands, without: ReadonlySet<number>): PairBand[] {
  const chains = mergedChains(set, model, without);
  const projections = new Map<string, GroupedProjection>();
  const means = bandMeans(set, model, bands);
  const takes = set.takes.length;
  return bands.bands.map(({ from, to }, band) => {
    const own = means.subarray(band * takes, (band + 1) * takes);
    const present = chains
      .map((chain, number) => ({ ...chain, number, takes: chain.takes.filter((t) => !Number.isNaN(own[t]!)) }))
      .filter((chain) => chain.takes.length > 0);
    const numbers = present.map(({ number }) => number);
    const key = numbers.join();
    const projection = projections.get(key) ?? groupedProjection(chainRows(present), undefined);
    projections.set(key, projection);
    const levels = Float64Array.from(present, (chain) => mean(chain.takes.map((t) => own[t]!)));
    return { from, to, ...fitOf(present, numbers, levels, projection) };
  });
}

/** The same band without one of its pairs; the band itself where it does not have the pair. */
export function withoutPair(band: PairBand, number: number): PairBand {
  const keep = band.numbers.map((own) => own !== number);
  if (keep.every(Boolean)) return band;
  const chains = band.chains.filter((_, p) => keep[p]);
  const numbers = band.numbers.filter((_, p) => keep[p]);
  const levels = band.levels.filter((_, p) => keep[p]);
  const projection = groupedProjection(chainRows(chains), undefined);
  return { from: band.from, to: band.to, ...fitOf(chains, numbers, levels, projection) };
}

/** What the links of a band's pairs leave of a response, an entry a pair. */
export function residualsIn({ projection }: Pick<PairBand, 'projection'>, response: Float64Array): Float64Array {
  const into = new Float64Array(response.length);
  projectionResiduals(projection, response, into);
  return into;
}

function fitOf(
  chains: readonly MergedChain[],
  numbers: readonly number[],
  levels: Float64Array,
  projection: GroupedProjection,
): Omit<PairBand, 'from' | 'to'> {
  const residuals = residualsIn({ projection }, levels);
  const fitted = levels.map((level, p) => level - residuals[p]!);
  return { chains, numbers, levels, fitted, residuals, projection, dof: levels.length - projection.rank };
}

/** Mean of each take over each band, less what is exactly known of its chain; NaN unless complete. Entry (band, take) at band · takes + take. */
function bandMeans(set: TakeSet, model: Model, { bands, bandOf }: Bands): Float64Array {
  const width = set.frequencies.length;
  const takes = set.takes.length;
  const counts = new Float64Array(bands.length);
  for (const band of bandOf) counts[band] = counts[band]! + 1;
  const means = new Float64Array(bands.length * takes);
  for (let t = 0; t < takes; t++) {
    const { known } = model.chains[t]!;
    for (let f = 0; f < width; f++) {
      const at = bandOf[f]! * takes + t;
      const level = set.levels[t * width + f]! - (known === undefined ? 0 : known[f]!);
      means[at] = means[at]! + level / counts[bandOf[f]!]!;
    }
  }
  return means;
}

function mean(values: readonly number[]): number {
  return values.reduce((sum, value) => sum + value, 0) / values.length;
}

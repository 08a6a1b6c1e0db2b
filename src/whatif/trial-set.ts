import { choleskyInPlace, choleskyInverse } from '../numeric/cholesky.ts';
import type { CandidateBench } from './candidate-bench.ts';
import type { Criterion, Merit } from './criterion.ts';

/** A ridge, as a part of the mean weight: what is left open has a variance of its inverse, and all sums stay finite. */
const RIDGE = 1e-7;
/** A variance above this part of the ridge's inverse is that of an open link. */
const OPEN = 1e-4;
/** A redundancy below this is rounding. */
const UNCHECKED = 1e-6;

/** A set of added takes with its covariance, for trying what one take more or less would do. */
export interface TrialSet {
  /** Seatings added to each chain. */
  readonly added: Int32Array;
  /** Adds (+1) or takes away (−1) a seating of a chain. Cost: links³. */
  readonly change: (chain: number, by: 1 | -1) => void;
  readonly merit: () => Merit;
  /** What the set would be with one seating of the chain more. Cost: links + chains. */
  readonly meritWith: (chain: number) => Merit;
}

/**
 * Holds (XᵀAX + prior + ridge)⁻¹ of a set, and tells from it what one row more would do.
 * Source: Sherman & Morrison 1950, Annals of Mathematical Statistics 21, 124–127.
 */
export function trialSet(bench: CandidateBench, criterion: Criterion, start: Int32Array): TrialSet {
  const { links: n, chains, counted } = bench;
  const added = Int32Array.from(start);
  const covariance = new Float64Array(n * n);
  const weights = Float64Array.from(chains, (_, c) => bench.information(c, 1).weight);
  const mean = weights.reduce((sum, weight) => sum + weight, 0) / Math.max(1, weights.length);
  const ridge = RIDGE * mean;
  const openAbove = OPEN / ridge;
  const column = new Float64Array(n);
  const spare = new Float64Array(n * n);
  /** Chains that the set has, with the variance of their fitted values. */
  let present: number[] = [];
  const fitted = new Float64Array(chains.length);
  const pairs = (counted.length * (counted.length - 1)) / 2;
  // A datum is held by a row of weight `mean`: beside the datum's own covariance that adds the same to every set.
  const ofDatum = new Float64Array(n);
  for (const { restraint, movement } of bench.datums) {
    const across = restraint.reduce((sum, entry, i) => sum + entry * movement[i]!, 0);
    for (let i = 0; i < n; i++) ofDatum[i] = ofDatum[i]! + movement[i]! ** 2 / (mean * across * across);
  }
  const datumSum = counted.reduce((sum, i) => sum + ofDatum[i]!, 0);
  /** Sum of the covariance over all counted links. */
  let total = 0;

  const times = (chain: number): number => {
    const { links, factors } = chains[chain]!;
    column.fill(0);
    for (let k = 0; k < links.length; k++) {
      const row = links[k]! * n;
      const factor = factors[k]!;
      for (let i = 0; i < n; i++) column[i] = column[i]! + factor * covariance[row + i]!;
    }
    return along(chain);
  };
  /** x · column. */
  const along = (chain: number): number => {
    const { links, factors } = chains[chain]!;
    let sum = 0;
    for (let k = 0; k < links.length; k++) sum += factors[k]! * column[links[k]!]!;
    return sum;
  };
  const refresh = () => {
    const normal = new Float64Array(n * n);
    for (let i = 0; i < n; i++) normal[i * n + i] = ridge;
    for (const { link, weight } of bench.priors) normal[link * n + link] = normal[link * n + link]! + weight;
    for (let c = 0; c < chains.length; c++) {
      const { weight } = bench.information(c, added[c]!);
      if (weight === 0) continue;
      const { links, factors } = chains[c]!;
      links.forEach((one, k) => {
        links.forEach((other, l) => {
          normal[one * n + other] = normal[one * n + other]! + weight * factors[k]! * factors[l]!;
        });
      });
    }
    for (const { restraint } of bench.datums) {
      for (let i = 0; i < n; i++) {
        const entry = mean * restraint[i]!;
        for (let j = 0; j < n; j++) normal[i * n + j] = normal[i * n + j]! + entry * restraint[j]!;
      }
    }
    if (!choleskyInPlace(normal, n)) throw new Error('a normal matrix with a ridge has no positive factor');
    choleskyInverse(normal, n, covariance, spare);
    present = [];
    for (let c = 0; c < chains.length; c++) {
      if (chains[c]!.counts.length + added[c]! === 0) continue;
      present.push(c);
      fitted[c] = times(c);
    }
    total = 0;
    for (const i of counted) for (const j of counted) total += covariance[i * n + j]!;
  };

  /** Merit where a row of weight `gain`/(variance) is added along `column`; `changed` has `more` seatings then. */
  const judge = (gain: number, changed: number, more: number): Merit => {
    let open = 0;
    let value = 0;
    let sum = 0;
    let columnSum = 0;
    for (let k = 0; k < counted.length; k++) {
      const i = counted[k]!;
      const own = column[i]!;
      const variance = covariance[i * n + i]! - gain * own * own - ofDatum[i]!;
      if (variance > openAbove) open++;
      sum += variance;
      columnSum += own;
      if (criterion === 'worst' && variance > value) value = variance;
    }
    if (criterion === 'mean') value = sum / counted.length;
    if (criterion === 'differences') {
      const ofAll = total - gain * columnSum * columnSum;
      value = pairs === 0 ? 0 : (counted.length * (sum + datumSum) - ofAll) / pairs;
    }
    let uncheckable = 0;
    let least = Number.POSITIVE_INFINITY;
    const judgeChain = (weight: number, a: number, b: number, variance: number) => {
      const left = Math.max(0, 1 - weight * variance);
      if (!(a > 0) && left < UNCHECKED) uncheckable++;
      else if (a + b * left < least) least = a + b * left;
    };
    for (let p = 0; p < present.length; p++) {
      const c = present[p]!;
      if (c === changed) continue;
      const information = bench.information(c, added[c]!);
      const across = gain === 0 ? 0 : along(c);
      judgeChain(information.weight, information.a, information.b, fitted[c]! - gain * across * across);
    }
    if (changed >= 0) {
      const information = bench.information(changed, added[changed]! + more);
      const across = along(changed);
      judgeChain(information.weight, information.a, information.b, across - gain * across * across);
    }
    if (criterion === 'checks') value = present.length === 0 && changed < 0 ? Number.POSITIVE_INFINITY : 1 / least;
    // As long as units are open, all is judged by how much is open, so that a search finds its way.
    return open > 0 ? { open, uncheckable: 0, value: Math.sqrt(sum) } : { open, uncheckable, value: Math.sqrt(value) };
  };

  refresh();
  return {
    added,
    change(chain, by) {
      added[chain] = added[chain]! + by;
      // Made anew: taking a row away by an update would leave rounding as large as the ridge's inverse.
      refresh();
    },
    merit() {
      column.fill(0);
      return judge(0, -1, 0);
    },
    meritWith(chain) {
      const more = bench.information(chain, added[chain]! + 1).weight - bench.information(chain, added[chain]!).weight;
      const variance = times(chain);
      return judge(more / (1 + more * variance), chain, 1);
    },
  };
}

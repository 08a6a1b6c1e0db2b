import { choleskyInPlace } from '../numeric/cholesky.ts';
import { type RandomStream, randomStream } from '../numeric/random.ts';
import { hertz } from '../quantity/frequency.ts';
import { bandHolding } from '../quantity/octave-bands.ts';
import type { SavedResult } from '../readings/saved-result.ts';

export interface MatchOptions {
  /** Units in a set. */
  readonly size: number;
  /** Largest difference within a set, in dB. */
  readonly within: number;
  /** Responses that may be in a set, indices. */
  readonly pool: readonly number[];
  /** Frequencies that count, indices. */
  readonly frequencies: readonly number[];
  readonly seed: number;
}

/** Responses that agree with each other. */
export interface MatchedSet {
  /** Indices into `SavedResult.responses`. */
  readonly members: readonly number[];
  /** Largest difference of two of them at any of the frequencies, in dB, and where it is. */
  readonly largest: number;
  readonly at: number;
  /** Chance that the true responses differ by no more than the tolerance; NaN where some have no uncertainty. */
  readonly probability: number;
}

export interface Matches {
  /** The most probable first. */
  readonly sets: readonly MatchedSet[];
  /** Whether there are more than were looked at. */
  readonly isCut: boolean;
}

/** Sets that are looked at; beyond it the answer is 'nearly all of them'. */
const MOST_SETS = 200;
/** Draws for a probability: its standard error is at most 0.5 %. */
const DRAWS = 10_000;

/**
 * Sets of responses of one role whose levels differ by no more than the tolerance at every frequency that counts, with the
 * probability that the true ones do too.
 * The truth is drawn around the levels with their covariance, as Student's t with the degrees of freedom of the least known
 * member. Errors count as the same all over a third-octave and as independent from one to the next: the probability is the
 * product over third-octaves of that at the worst frequency in each.
 * Source: JCGM 101:2008, 5.9 and 6.4.9 (draws from a scaled and shifted t distribution, here multivariate).
 */
export function matchResponses(result: SavedResult, options: MatchOptions): Matches {
  const { size, within, frequencies, pool } = options;
  const count = result.responses.length;
  const gap = (a: number, b: number) => {
    let largest = 0;
    let at = frequencies[0]!;
    for (const f of frequencies) {
      const difference = Math.abs(result.levels[f * count + a]! - result.levels[f * count + b]!);
      // A level that is not there agrees with nothing.
      if (Number.isNaN(difference)) return { largest: Number.POSITIVE_INFINITY, at: f };
      if (difference > largest) [largest, at] = [difference, f];
    }
    return { largest, at };
  };
  const gaps = new Map<string, { largest: number; at: number }>();
  for (const a of pool) {
    for (const b of pool) {
      const isSame = result.responses[a]!.role === result.responses[b]!.role;
      gaps.set(`${a} ${b}`, isSame ? gap(a, b) : { largest: Number.POSITIVE_INFINITY, at: 0 });
    }
  }
  const sets: number[][] = [];
  const grow = (members: readonly number[], from: number): void => {
    if (members.length === size) {
      sets.push([...members]);
      return;
    }
    for (let k = from; k < pool.length && sets.length <= MOST_SETS; k++) {
      const next = pool[k]!;
      if (members.every((member) => gaps.get(`${member} ${next}`)!.largest <= within)) grow([...members, next], k + 1);
    }
  };
  grow([], 0);
  const isCut = sets.length > MOST_SETS;
  const found = sets.slice(0, MOST_SETS).map((members, k): MatchedSet => {
    const pairs = members.flatMap((a, i) => members.slice(i + 1).map((b) => gaps.get(`${a} ${b}`)!));
    const worst = pairs.reduce((most, pair) => (pair.largest > most.largest ? pair : most));
    const probability = probabilityOf(result, members, options, randomStream(options.seed, k));
    return { members, largest: worst.largest, at: worst.at, probability };
  });
  const rank = ({ probability }: MatchedSet) => (Number.isNaN(probability) ? -1 : probability);
  return { sets: found.sort((a, b) => rank(b) - rank(a) || a.largest - b.largest), isCut };
}

function probabilityOf(
  result: SavedResult,
  members: readonly number[],
  { within, frequencies }: MatchOptions,
  stream: RandomStream,
): number {
  const bands = new Map<number, number[]>();
  for (const f of frequencies) {
    const { index } = bandHolding(hertz(result.frequencies[f]!), 3);
    bands.set(index, [...(bands.get(index) ?? []), f]);
  }
  let product = 1;
  for (const inBand of bands.values()) {
    const margins = inBand.map((f) => marginAt(result, members, f, within));
    if (margins.some(Number.isNaN)) return Number.NaN;
    const worst = margins.indexOf(Math.min(...margins));
    product *= shareWithin(result, members, inBand[worst]!, within, stream);
  }
  return product;
}

/** How many standard uncertainties the closest pair has left to the tolerance. */
function marginAt(result: SavedResult, members: readonly number[], f: number, within: number): number {
  const count = result.responses.length;
  let least = Number.POSITIVE_INFINITY;
  for (const [i, a] of members.entries()) {
    for (const b of members.slice(i + 1)) {
      const variance = result.covariance(f, a, a) + result.covariance(f, b, b) - 2 * result.covariance(f, a, b);
      if (Number.isNaN(variance)) return Number.NaN;
      const left = within - Math.abs(result.levels[f * count + a]! - result.levels[f * count + b]!);
      least = Math.min(least, left / Math.sqrt(Math.max(variance, 1e-12)));
    }
  }
  return least;
}

function shareWithin(
  result: SavedResult,
  members: readonly number[],
  f: number,
  within: number,
  stream: RandomStream,
): number {
  const n = members.length;
  const count = result.responses.length;
  const factor = Float64Array.from({ length: n * n }, (_, k) => {
    const [i, j] = [Math.floor(k / n), k % n];
    const covariance = result.covariance(f, members[i]!, members[j]!);
    // A trace on the diagonal: a response that shares everything with another one leaves the matrix singular.
    return i === j ? covariance * (1 + 1e-9) + 1e-15 : covariance;
  });
  if (!choleskyInPlace(factor, n)) return Number.NaN;
  const dof = Math.min(...members.map((member) => result.dof[f * count + member]!));
  const normals = new Float64Array(n);
  let held = 0;
  for (let draw = 0; draw < DRAWS; draw++) {
    for (let i = 0; i < n; i++) normals[i] = stream.normal();
    const widening = Math.sqrt(studentWidening(dof, stream));
    let low = Number.POSITIVE_INFINITY;
    let high = Number.NEGATIVE_INFINITY;
    for (let i = 0; i < n; i++) {
      let error = 0;
      for (let j = 0; j <= i; j++) error += factor[i * n + j]! * normals[j]!;
      const level = result.levels[f * count + members[i]!]! + widening * error;
      low = Math.min(low, level);
      high = Math.max(high, level);
    }
    if (high - low <= within) held++;
  }
  return held / DRAWS;
}

/** ν / χ²(ν) with whole ν (rounded down, at least 1); 1 for many degrees of freedom, where it would not show. */
function studentWidening(dof: number, stream: RandomStream): number {
  if (!(dof < 200)) return 1;
  const whole = Math.max(1, Math.floor(dof));
  let square = 0;
  for (let k = 0; k < whole; k++) square += stream.normal() ** 2;
  return whole / square;
}

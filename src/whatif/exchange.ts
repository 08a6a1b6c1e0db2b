import { type RandomStream, randomStream } from '../numeric/random.ts';
import type { CandidateBench } from './candidate-bench.ts';
import { type Criterion, isBetter, type Merit } from './criterion.ts';
import { type TrialSet, trialSet } from './trial-set.ts';

export interface SearchOptions {
  /** Seatings to add. */
  readonly count: number;
  /** How often one chain may be added at most. */
  readonly most: number;
  readonly criterion: Criterion;
  readonly seed: number;
  /** Starts of an exchange; absent: as many as a few seconds allow. The first one is greedy and needs no luck. */
  readonly starts?: number | undefined;
  /** Called with the work done and all there is. */
  readonly onProgress?: ((done: number, total: number) => void) | undefined;
}

export interface FoundSet {
  /** Seatings added to each chain. */
  readonly added: Int32Array;
  readonly merit: Merit;
  /** Whether every possible set was tried. */
  readonly isExhaustive: boolean;
  /** Sets tried, or random starts of the exchange. */
  readonly tried: number;
}

/** Up to so many sets are all tried. */
const MOST_SETS = 20_000;
/** Work that the exchange is given, in candidates looked at, each a few hundred operations: a few seconds. */
const EXCHANGE_WORK = 1_000_000;
const FEWEST_STARTS = 2;
const MOST_STARTS = 150;
/** Part of the best set that is thrown away, at random, before every second start. */
const SHAKEN_PART = 1 / 3;
/** Passes of an exchange that are reckoned with when starts are counted; it goes on as long as it gains. */
const USUAL_PASSES = 4;

/**
 * The best set of chains to add: all sets are tried where they are few, else found by exchange.
 * @throws RangeError where there are fewer chains to add than are wanted.
 */
export function bestSet(bench: CandidateBench, options: SearchOptions): FoundSet {
  const open = addable(bench);
  if (open.length * options.most < options.count) throw new RangeError('more takes to add than there are candidates');
  return setsOf(open.length, options.count, options.most) <= MOST_SETS
    ? tryEverySet(bench, options)
    : exchange(bench, options);
}

function addable({ chains }: CandidateBench): number[] {
  return [...chains.keys()].filter((c) => chains[c]!.seating !== undefined);
}

/** Number of sets of `count` out of `items`, each at most `most` times; stops counting far above what can be tried. */
function setsOf(items: number, count: number, most: number): number {
  let ways = new Float64Array(count + 1);
  ways[0] = 1;
  for (let item = 0; item < items; item++) {
    const next = new Float64Array(count + 1);
    for (let used = 0; used <= count; used++) {
      for (let times = 0; times <= Math.min(most, used); times++) next[used] = next[used]! + ways[used - times]!;
    }
    ways = next;
  }
  return ways[count]!;
}

/** Tries every set, in the order of the candidates: of equally good ones the first is kept. */
export function tryEverySet(bench: CandidateBench, { count, most, criterion, onProgress }: SearchOptions): FoundSet {
  const items = addable(bench);
  const total = setsOf(items.length, count, most);
  const set = trialSet(bench, criterion, new Int32Array(bench.chains.length));
  let best: { added: Int32Array; merit: Merit } | undefined;
  let tried = 0;
  const note = (added: Int32Array, merit: Merit) => {
    tried++;
    if (best === undefined || isBetter(merit, best.merit)) best = { added: Int32Array.from(added), merit };
  };
  const descend = (from: number, left: number) => {
    if (left === 0) return note(set.added, set.merit());
    // Enough candidates must be left to fill the set.
    for (let i = from; i < items.length && (items.length - i) * most >= left; i++) {
      const chain = items[i]!;
      if (set.added[chain]! >= most) continue;
      if (left === 1) {
        const merit = set.meritWith(chain);
        const added = Int32Array.from(set.added);
        added[chain] = added[chain]! + 1;
        note(added, merit);
        continue;
      }
      set.change(chain, 1);
      onProgress?.(tried, total);
      descend(i, left - 1);
      set.change(chain, -1);
    }
  };
  descend(0, count);
  if (best === undefined) throw new RangeError('no set of takes to try');
  return { ...best, isExhaustive: true, tried };
}

/**
 * Exchange: from a start, each added chain in turn is taken out and the best candidate put in its place, as long as that
 * gains; the best of several starts is kept: a greedy one, random ones, and,
 * by turns with these, the best set so far with a third of it thrown away.
 * Source: Fedorov 1972, Theory of Optimal Experiments, section 3.3; Atkinson & Donev 1992, Optimum Experimental Designs,
 * chapter 15 (both recalled from memory).
 */
export function exchange(bench: CandidateBench, options: SearchOptions): FoundSet {
  const { count, criterion, seed, onProgress } = options;
  const items = addable(bench);
  const work = items.length * count * USUAL_PASSES * Math.max(1, bench.chains.length / 200);
  const starts = options.starts ?? Math.min(MOST_STARTS, Math.max(FEWEST_STARTS, Math.ceil(EXCHANGE_WORK / work)));
  let best: { added: Int32Array; merit: Merit } | undefined;
  for (let start = 0; start < starts; start++) {
    const tell = (part: number) => onProgress?.(start + part, starts);
    const set = trialSet(bench, criterion, new Int32Array(bench.chains.length));
    if (start === 0) for (let k = 0; k < count; k++) set.change(bestToAdd(set, items, options).chain, 1);
    else startAtRandom(set, items, options, randomStream(seed + start), start % 2 === 0 ? best!.added : undefined);
    const merit = exchanged(set, items, options, tell);
    if (best === undefined || isBetter(merit, best.merit)) best = { added: Int32Array.from(set.added), merit };
  }
  return { ...best!, isExhaustive: false, tried: starts };
}

/** A set at random; or one that keeps two thirds of another. */
function startAtRandom(
  set: TrialSet,
  items: readonly number[],
  { count, most }: SearchOptions,
  stream: RandomStream,
  near: Int32Array | undefined,
): void {
  let left = count;
  if (near !== undefined) {
    const kept = items.flatMap((chain) => new Array<number>(near[chain]!).fill(chain));
    for (let shaken = Math.max(2, Math.round(SHAKEN_PART * count)); shaken > 0 && kept.length > 0; shaken--) {
      kept.splice(stream.below(kept.length), 1);
    }
    for (const chain of kept) set.change(chain, 1);
    left -= kept.length;
  }
  while (left > 0) {
    const chain = items[stream.below(items.length)]!;
    if (set.added[chain]! >= most) continue;
    set.change(chain, 1);
    left--;
  }
}

/** Exchanges until nothing gains any more. @returns the merit reached. */
function exchanged(
  set: TrialSet,
  items: readonly number[],
  options: SearchOptions,
  tell: (part: number) => void,
): Merit {
  let merit = set.merit();
  for (let isGaining = true; isGaining; ) {
    isGaining = false;
    const slots = items.flatMap((chain) => new Array<number>(set.added[chain]!).fill(chain));
    for (const [k, chain] of slots.entries()) {
      tell(k / slots.length);
      set.change(chain, -1);
      const found = bestToAdd(set, items, options);
      // What is no better than what was taken out stays out, so that ties do not wander.
      const isGain = isBetter(found.merit, merit);
      set.change(isGain ? found.chain : chain, 1);
      if (!isGain) continue;
      merit = found.merit;
      isGaining = true;
    }
  }
  return set.merit();
}

function bestToAdd(set: TrialSet, items: readonly number[], { most }: SearchOptions): { chain: number; merit: Merit } {
  let best: { chain: number; merit: Merit } | undefined;
  for (const chain of items) {
    if (set.added[chain]! >= most) continue;
    const merit = set.meritWith(chain);
    if (best === undefined || isBetter(merit, best.merit)) best = { chain, merit };
  }
  return best!;
}

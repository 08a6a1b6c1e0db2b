import type { Model } from '../model/model.ts';
import type { TakeSet } from '../takes/take-set.ts';
import type { MergedChain } from './merged-chains.ts';

/** What pure error is seen between: a seating of a pair, or a single take. */
export interface SeatedRow {
  /** Index of the chain. */
  readonly chain: number;
  readonly links: readonly number[];
  readonly factors: readonly number[];
  /** Takes whose mean makes the row. */
  readonly takes: readonly number[];
}

export interface SeatedRows {
  readonly rows: readonly SeatedRow[];
  /** What differs between the rows of a pair; `nothing` where every pair has a single take. */
  readonly from: 'reseats' | 'repeats' | 'nothing';
}

/** Means over the repeats of a seating where any pair was mounted again, since repeats know nothing of that; else single takes. */
export function seatedRows(set: TakeSet, chains: readonly MergedChain[]): SeatedRows {
  const seated = chains.flatMap(({ takes, links, factors }, chain) => {
    const seatings = new Map<string, number[]>();
    for (const t of takes) {
      const key = seatingKey(set, t);
      seatings.set(key, [...(seatings.get(key) ?? []), t]);
    }
    return [...seatings.values()].map((own): SeatedRow => ({ chain, links, factors, takes: own }));
  });
  if (seated.length > chains.length) return { rows: seated, from: 'reseats' };
  const single = seated.flatMap((row) => row.takes.map((t): SeatedRow => ({ ...row, takes: [t] })));
  return { rows: single, from: single.length > seated.length ? 'repeats' : 'nothing' };
}

// The same seatings of both units, whichever way round the take was made.
function seatingKey(set: TakeSet, t: number): string {
  const take = set.takes[t]!;
  const ends = [
    JSON.stringify([take.emitter, take.emitterMount, take.emitterSeating]),
    JSON.stringify([take.receiver, take.receiverMount, take.receiverSeating]),
  ];
  return JSON.stringify([take.session, take.path, ...ends.sort()]);
}

/**
 * Means of the rows over their takes that were measured, in dB, less what is exactly known of their chains; NaN where none
 * was. Entry (row, f) at row · frequencies + f.
 */
export function rowLevels(set: TakeSet, model: Model, rows: readonly SeatedRow[]): Float64Array {
  const width = set.frequencies.length;
  const levels = new Float64Array(rows.length * width);
  const counts = new Float64Array(width);
  rows.forEach(({ takes }, r) => {
    counts.fill(0);
    for (const t of takes) {
      const { known } = model.chains[t]!;
      for (let f = 0; f < width; f++) {
        const level = set.levels[t * width + f]! - (known === undefined ? 0 : known[f]!);
        if (Number.isNaN(level)) continue;
        levels[r * width + f] = levels[r * width + f]! + level;
        counts[f] = counts[f]! + 1;
      }
    }
    for (let f = 0; f < width; f++) levels[r * width + f] = levels[r * width + f]! / counts[f]!;
  });
  return levels;
}

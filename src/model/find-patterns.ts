import type { TakeSet } from '../takes/take-set.ts';
import type { Model } from './model.ts';
import type { Pattern } from './separability.ts';
import { tellApart } from './tell-apart.ts';

/** The patterns of available readings, and the pattern of each frequency. */
export interface Patterns {
  readonly patterns: readonly Pattern[];
  readonly patternOf: Int32Array;
}

/** A reading counts where it was measured and the exactly known part of its chain is known. */
function isAvailable(set: TakeSet, model: Model, take: number, frequency: number): boolean {
  const level = set.levels[take * set.frequencies.length + frequency]!;
  const known = model.chains[take]!.known;
  return !Number.isNaN(level) && (known === undefined || !Number.isNaN(known[frequency]!));
}

/** Links of each frequency that have a prior at `frequency`. */
export function knownLinks(model: Model, frequency: number): number[] {
  const known: number[] = [];
  for (let link = 0; link < model.linksPerFrequency; link++) {
    const prior = model.links[link]!.prior;
    if (prior !== undefined && !Number.isNaN(prior.value[frequency]!)) known.push(link);
  }
  return known;
}

/**
 * Groups the frequencies by what was measured at them, and decides for each group what can be told apart.
 * Cost: takes × frequencies, plus the graph once a pattern.
 */
export function findPatterns(set: TakeSet, model: Model): Patterns {
  const width = set.frequencies.length;
  const hashes = hashColumns(set, model);
  const groups: { frequencies: number[]; takes: number[]; known: number[] }[] = [];
  const byHash = new Map<number, number[]>();
  const patternOf = new Int32Array(width);
  for (let f = 0; f < width; f++) {
    const candidates = byHash.get(hashes[f]!) ?? [];
    // The hash only narrows the search; equality is decided on the takes themselves.
    let group = candidates.find((index) => samePattern(set, model, groups[index]!, f));
    if (group === undefined) {
      group = groups.length;
      const takes = set.takes.map((_, t) => t).filter((t) => isAvailable(set, model, t, f));
      groups.push({ frequencies: [], takes, known: knownLinks(model, f) });
      byHash.set(hashes[f]!, [...candidates, group]);
    }
    groups[group]!.frequencies.push(f);
    patternOf[f] = group;
  }
  const patterns = groups.map(
    ({ frequencies, takes, known }): Pattern => ({
      frequencies,
      takes,
      separability: tellApart(model, takes, new Set(known)),
    }),
  );
  return { patterns, patternOf };
}

function hashColumns(set: TakeSet, model: Model): Int32Array {
  const width = set.frequencies.length;
  const hashes = new Int32Array(width);
  for (let t = 0; t < set.takes.length; t++) {
    for (let f = 0; f < width; f++) {
      if (isAvailable(set, model, t, f)) hashes[f] = Math.imul(hashes[f]! ^ (t + 1), 0x01000193) + 0x9e3779b9;
    }
  }
  return hashes;
}

function samePattern(
  set: TakeSet,
  model: Model,
  group: { readonly takes: readonly number[]; readonly known: readonly number[] },
  frequency: number,
): boolean {
  let count = 0;
  for (let t = 0; t < set.takes.length; t++) if (isAvailable(set, model, t, frequency)) count++;
  return (
    count === group.takes.length &&
    group.takes.every((t) => isAvailable(set, model, t, frequency)) &&
    group.known.join() === knownLinks(model, frequency).join()
  );
}

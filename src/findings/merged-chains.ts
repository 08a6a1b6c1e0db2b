import type { Model } from '../model/model.ts';
import type { TakeSet } from '../takes/take-set.ts';

/** Takes that the model explains by the same links, gains included: repeats, seatings, and in the reciprocal model both directions. */
export interface MergedChain {
  /** Indices into the takes, ascending. */
  readonly takes: readonly number[];
  /** Indices into `Model.links` in ascending order with their factors; what is drawn at random (seating, partner) is left out. */
  readonly links: readonly number[];
  readonly factors: readonly number[];
  /** The two response links; the same one twice for a twin reading. */
  readonly ends: readonly [number, number];
  /** Paths and gains: they must cancel as well where responses do. */
  readonly labels: readonly number[];
}

/** @param without indices of takes to leave out. Chains are in the order of their first takes. Cost: linear in the takes. */
export function mergedChains(set: TakeSet, model: Model, without: ReadonlySet<number>): MergedChain[] {
  const groups = new Map<string, { entries: (readonly [number, number])[]; takes: number[] }>();
  set.takes.forEach((_, t) => {
    if (without.has(t)) return;
    const { links, factors } = model.chains[t]!;
    const entries = links
      .map((link, k) => [link, factors[k]!] as const)
      .filter(([link]) => !isRandom(model, link))
      .sort(([a], [b]) => a - b);
    const key = entries.join(';');
    const group = groups.get(key);
    if (group === undefined) groups.set(key, { entries, takes: [t] });
    else group.takes.push(t);
  });
  return [...groups.values()].map(({ entries, takes }) => {
    const links = entries.map(([link]) => link);
    const ends = links.filter((link) => model.links[link]!.kind === 'response');
    return {
      takes,
      links,
      factors: entries.map(([, factor]) => factor),
      ends: [ends[0]!, ends[1] ?? ends[0]!],
      labels: links.filter((link) => model.links[link]!.kind !== 'response'),
    };
  });
}

function isRandom(model: Model, link: number): boolean {
  const { kind } = model.links[link]!;
  return kind === 'seating' || kind === 'partner';
}

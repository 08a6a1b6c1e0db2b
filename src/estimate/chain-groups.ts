import type { Model } from '../model/model.ts';
import type { TakeSet } from '../takes/take-set.ts';
import { type SharedSeatings, sharedSeatings } from './shared-seatings.ts';

/** Takes that the model explains by the same links: what can differ between them is seating and noise. */
export interface ChainGroup {
  /** Links of each frequency with their factors. */
  readonly links: readonly number[];
  readonly factors: readonly number[];
  /** The two ends of the chain as response links; the same one twice for a twin reading. */
  readonly ends: readonly [number, number];
  /** Indices into the takes, grouped by seating: takes of one group differ in nothing but the repeat. */
  readonly seatings: readonly (readonly number[])[];
}

/**
 * Groups takes by chain and, within a chain, by seating. Seatings count as independent of each other here; those that
 * share a unit's seating are told by `ChainLayout.shared`. Gains shared by all frequencies do not tell chains apart.
 */
function chainGroups(set: TakeSet, model: Model): ChainGroup[] {
  const groups = new Map<string, { chain: number; seatings: Map<string, number[]> }>();
  set.takes.forEach((take, t) => {
    const chain = model.chains[t]!;
    const key = chain.links.filter((link) => link < model.linksPerFrequency).join();
    const group = groups.get(key) ?? { chain: t, seatings: new Map<string, number[]>() };
    groups.set(key, group);
    const seating = JSON.stringify([take.emitter, take.session, take.emitterSeating, take.receiverSeating]);
    group.seatings.set(seating, [...(group.seatings.get(seating) ?? []), t]);
  });
  return [...groups.values()].map(({ chain, seatings }) => {
    const { links, factors } = model.chains[chain]!;
    const own = links.map((_, k) => k).filter((k) => links[k]! < model.linksPerFrequency);
    const ends = own.map((k) => links[k]!).filter((link) => model.links[link]!.kind === 'response');
    return {
      links: own.map((k) => links[k]!),
      factors: own.map((k) => factors[k]!),
      ends: [ends[0]!, ends[1] ?? ends[0]!],
      seatings: [...seatings.values()],
    };
  });
}

/** Chains and their seatings as flat arrays: chain c owns the seatings `seatStart[c]` to `seatStart[c + 1]`. */
export interface ChainLayout {
  readonly groups: readonly ChainGroup[];
  readonly seatStart: Int32Array;
  /** Takes of each seating. */
  readonly takes: readonly (readonly number[])[];
  readonly chainOfSeat: Int32Array;
  /** Seating of each take. */
  readonly seatOf: Int32Array;
  /** Seatings of single units that serve more than one seating of a pair. */
  readonly shared: SharedSeatings;
}

export function chainLayout(set: TakeSet, model: Model): ChainLayout {
  const groups = chainGroups(set, model);
  const seatStart = new Int32Array(groups.length + 1);
  groups.forEach(({ seatings }, c) => {
    seatStart[c + 1] = seatStart[c]! + seatings.length;
  });
  const takes = groups.flatMap(({ seatings }) => seatings);
  const chainOfSeat = new Int32Array(takes.length);
  groups.forEach((_, c) => {
    chainOfSeat.fill(c, seatStart[c], seatStart[c + 1]);
  });
  const seatOf = new Int32Array(set.takes.length);
  takes.forEach((members, seat) => {
    for (const t of members) seatOf[t] = seat;
  });
  const layout = { groups, seatStart, takes, chainOfSeat, seatOf };
  return { ...layout, shared: sharedSeatings(set, model, layout) };
}

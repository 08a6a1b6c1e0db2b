import type { Model } from '../model/model.ts';
import type { NestedDesign } from '../numeric/nested-anova.ts';
import type { Take, TakeSet } from '../takes/take-set.ts';

/** Number of the pair and of the seating of each take, over the whole set. */
export interface Seatings {
  readonly pair: Int32Array;
  readonly seating: Int32Array;
}

/**
 * Sorts the takes into pairs and seatings.
 *
 * A pair is two units and the links of their chain; the two directions are one pair where their chains have the same
 * links, as in the reciprocal model. Takes of a pair that agree in both seatings (and path and mounts) are one seating; a
 * unit without a seating label counts as mounted once in each session. The two directions of a seating of one pair are
 * repeats of each other.
 */
export function seatingsOf(set: TakeSet, model: Model): Seatings {
  const pairs = new Map<string, number>();
  const seatings = new Map<string, number>();
  const keys = set.takes.map((take, index) => keysOf(take, index, model));
  return {
    pair: Int32Array.from(keys, ({ pair }) => numberOf(pairs, pair)),
    seating: Int32Array.from(keys, ({ pair, seating }) => numberOf(seatings, `${pair} ${seating}`)),
  };
}

/**
 * The takes as seatings within pairs, and the links that are to explain the pairs: all of them, gains too, count as
 * unknown at each frequency, so that neither responses nor certificates nor gains have a say in the scatter.
 * @param takes indices into the takes; row r of the design is take `takes[r]`.
 */
export function ladderDesign(model: Model, { pair, seating }: Seatings, takes: readonly number[]): NestedDesign {
  const columnOf = new Map<number, number>();
  const outer = new Map<number, number>();
  const inner = new Map<number, number>();
  const start = [0];
  const column: number[] = [];
  const factor: number[] = [];
  for (const index of takes) {
    const { links, factors } = model.chains[index]!;
    links.forEach((link, k) => {
      const { kind } = model.links[link]!;
      if (kind === 'seating' || kind === 'partner') return;
      column.push(numberOf(columnOf, link));
      factor.push(factors[k]!);
    });
    start.push(column.length);
  }
  return {
    fixed: {
      start: Int32Array.from(start),
      column: Int32Array.from(column),
      factor: Float64Array.from(factor),
      columns: columnOf.size,
    },
    outer: Int32Array.from(takes, (index) => numberOf(outer, pair[index]!)),
    inner: Int32Array.from(takes, (index) => numberOf(inner, seating[index]!)),
  };
}

function keysOf(take: Take, index: number, model: Model): { readonly pair: string; readonly seating: string } {
  const ends = [
    { unit: take.emitter, seating: [take.emitterMount, take.emitterSeating, unlabelled(take.emitterSeating, take)] },
    {
      unit: take.receiver,
      seating: [take.receiverMount, take.receiverSeating, unlabelled(take.receiverSeating, take)],
    },
  ].map((end) => ({ ...end, text: JSON.stringify([end.unit, end.seating]) }));
  // The links tell the two directions apart where the model does.
  ends.sort((a, b) => (a.text < b.text ? -1 : a.text > b.text ? 1 : 0));
  const { links, factors } = model.chains[index]!;
  const chain = links
    .map((link, k) => [link, factors[k]!] as const)
    .filter(([link]) => link < model.linksPerFrequency)
    .sort(([a], [b]) => a - b);
  return {
    pair: JSON.stringify([ends.map((end) => end.unit), chain]),
    seating: JSON.stringify([take.path, ends.map((end) => end.seating)]),
  };
}

function unlabelled(seating: string, take: Take): string {
  return seating === '' ? take.session : '';
}

function numberOf<K>(numbers: Map<K, number>, key: K): number {
  const known = numbers.get(key);
  if (known !== undefined) return known;
  numbers.set(key, numbers.size);
  return numbers.size - 1;
}

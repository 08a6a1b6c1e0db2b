import { describe, expect, it } from 'vitest';
import { randomStream } from '../../src/numeric/random.ts';
import { asMounted, mountedAnew } from '../../src/whatif/as-mounted.ts';
import { costOf, mountingsInOrder } from '../../src/whatif/costs.ts';
import { type PlannedSeating, seatingOf } from '../../src/whatif/design.ts';
import { fewestMountings } from '../../src/whatif/fewest-mountings.ts';
import { walker, walkPlan } from '../../src/whatif/mounting-walk.ts';
import { betterAll, orderSeatings } from '../../src/whatif/order.ts';
import { namedUnits, patternDesign } from '../../src/whatif/patterns.ts';
import { designOf } from './designs-made.ts';

/** Every order of the items. */
function* orders(items: readonly number[]): Generator<number[]> {
  if (items.length === 0) yield [];
  for (const first of items) {
    for (const rest of orders(items.filter((item) => item !== first))) yield [first, ...rest];
  }
}

function fewestByTrial(seatings: readonly PlannedSeating[]): number {
  const { mountings } = walker(walkPlan(seatings));
  let least = Number.POSITIVE_INFINITY;
  for (const order of orders([...seatings.keys()])) least = Math.min(least, mountings(order));
  return least;
}

function randomSeatings(seed: number, count: number): PlannedSeating[] {
  const stream = randomStream(seed);
  const units = namedUnits(3 + stream.below(4));
  return Array.from({ length: count }, () => {
    const one = stream.below(units.length);
    const other = (one + 1 + stream.below(units.length - 1)) % units.length;
    return seatingOf(units[one]!, units[other]!);
  });
}

describe('the order of takes', () => {
  it.each(Array.from({ length: 24 }, (_, k) => k))(
    'needs as few mountings as the best of all orders, case %d',
    (seed) => {
      const seatings = randomSeatings(seed, 4 + (seed % 4));
      const least = fewestByTrial(seatings);
      const { mountings, isOptimal, seatings: found } = orderSeatings(seatings, 1);
      expect({ mountings, isOptimal }).toEqual({ mountings: least, isOptimal: true });
      expect(mountingsInOrder(found)).toBe(least);
      expect(found).toHaveLength(seatings.length);
      expect(fewestMountings(walkPlan(seatings))).toBeLessThanOrEqual(least);
    },
  );

  it.each(Array.from({ length: 12 }, (_, k) => k))('is found by exchanges alone as well, case %d', (seed) => {
    const seatings = randomSeatings(100 + seed, 7);
    const plan = walkPlan(seatings);
    const { mountings } = walker(plan);
    // No bound: as if nobody knew how few are possible.
    const order = betterAll(plan, [...seatings.keys()], mountings, 0, 1);
    expect(mountings(order)).toBe(fewestByTrial(seatings));
  });

  it('reaches one mounting a pair, and one more, for all pairs of up to twelve units', () => {
    for (const units of [4, 6, 9, 12]) {
      const { seatings } = patternDesign(namedUnits(units), 'all', { seatings: 1, repeats: 1 });
      const { mountings, isOptimal, given } = orderSeatings(seatings, 1);
      expect({ mountings, isOptimal }).toEqual({ mountings: seatings.length + 1, isOptimal: true });
      expect(given).toBeGreaterThan(mountings);
    }
  });

  it('does not mount a pair anew to turn it round', () => {
    expect(orderSeatings(designOf('A>B', 'C>D', 'B>A', 'D>C').seatings, 1).mountings).toBe(4);
  });

  it('mounts both units anew where a pair is to be mounted a second time', () => {
    expect(mountingsInOrder(designOf('A>B x2').seatings)).toBe(4);
    // A stays for A>C, but cannot stay for the second A>B: it would be the same seating of A.
    const [ab, ac] = designOf('A>B', 'A>C').seatings as [PlannedSeating, PlannedSeating];
    expect(mountingsInOrder([ab, ac, ab])).toBe(2 + 1 + 2);
  });

  it('keeps sessions apart and control takes at start, middle and end', () => {
    const of = (session: string) => designOf('A>B', 'C>D', 'B>C', 'D>A').seatings.map((s) => ({ ...s, session }));
    const control = { ...seatingOf('A', 'C', { kind: 'control' }), session: 'one' };
    const { seatings } = orderSeatings([...of('one'), control, control, control, ...of('two')], 1);
    expect(seatings.map(({ session }) => session)).toEqual([...Array(7).fill('one'), ...Array(4).fill('two')]);
    expect(seatings.map(({ kind }) => kind === 'control').slice(0, 7)).toEqual([
      true,
      false,
      false,
      true,
      false,
      false,
      true,
    ]);
  });
});

describe('seating numbers', () => {
  it('stay while a unit stays mounted, count each unit from where it stood, and cost what the walk counts', () => {
    const { seatings, mountings } = orderSeatings(designOf('A>B', 'B>C x2', 'A>C').seatings, 1);
    const labelled = asMounted(seatings, new Map([['A', 7]]));
    expect(costOf(labelled, { take: 0, reseat: 1 }).mountings).toBe(mountings);
    const ofA = labelled.flatMap((s) => [
      ...(s.emitter === 'A' ? [s.emitterSeating] : []),
      ...(s.receiver === 'A' ? [s.receiverSeating] : []),
    ]);
    expect(ofA.every((label) => Number(label) > 7)).toBe(true);
    const chains = labelled.map((s) => [s.emitter, s.receiver, s.emitterSeating, s.receiverSeating].join());
    expect(new Set(chains).size).toBe(labelled.length);
  });

  it('are new for both units of every pair where all is mounted anew', () => {
    const labelled = mountedAnew(designOf('A>B', 'A>C', 'A>B').seatings, new Map());
    expect(labelled.map((s) => `${s.emitterSeating} ${s.receiverSeating}`)).toEqual(['1 1', '2 1', '3 2']);
    expect(costOf(labelled, { take: 1, reseat: 10 })).toEqual({ takes: 3, mountings: 6, minutes: 63 });
  });
});

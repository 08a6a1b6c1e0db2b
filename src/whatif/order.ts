import { type RandomStream, randomStream } from '../numeric/random.ts';
import { bySession, mountingsInOrder } from './costs.ts';
import type { PlannedSeating } from './design.ts';
import { fewestMountings } from './fewest-mountings.ts';
import { type WalkPlan, walker, walkPlan } from './mounting-walk.ts';

export interface OrderedSeatings {
  /** Those that are still to be made, in the new order. */
  readonly seatings: readonly PlannedSeating[];
  /** Acts of mounting one unit, in this order and in the one given, where a unit that is needed next stays mounted. */
  readonly mountings: number;
  readonly given: number;
  /** Whether no order needs fewer, because all were tried or the least that is possible was reached. */
  readonly isOptimal: boolean;
}

/** So many seatings or fewer are ordered by trying all orders. */
const MOST_TRIED = 9;
/** Beyond so many seatings the order is made step by step, and not bettered by exchanges, which would take minutes. */
const MOST_BETTERED = 120;
const RESTARTS = 6;

/**
 * Orders seatings so that as few units as possible are mounted between one and the next; sessions stay apart and in their
 * order. Control seatings keep their places: start, middle and end of each session.
 * Small sets are tried in all orders (branch and bound); larger ones are built step by step and bettered by moving and
 * reversing stretches (or-opt and 2-opt; Croes 1958, Operations Research 6, 791–812, recalled from memory), from seeded
 * starts.
 */
export function orderSeatings(seatings: readonly PlannedSeating[], seed: number): OrderedSeatings {
  const due = seatings.filter(({ kind }) => kind !== 'made');
  const sessions = bySession(due).map((own) => ({ given: mountingsInOrder(own), ...orderSession(own, seed) }));
  return {
    seatings: sessions.flatMap((session) => session.seatings),
    mountings: sessions.reduce((sum, session) => sum + session.mountings, 0),
    given: sessions.reduce((sum, session) => sum + session.given, 0),
    isOptimal: sessions.every((session) => session.isOptimal),
  };
}

function orderSession(seatings: readonly PlannedSeating[], seed: number) {
  const plan = walkPlan(seatings);
  const controls = [...seatings.keys()].filter((k) => seatings[k]!.kind === 'control');
  const rest = [...seatings.keys()].filter((k) => seatings[k]!.kind !== 'control');
  const place = (order: readonly number[]) => withControls(order, controls);
  const { mountings } = walker(plan);
  const cost = (order: readonly number[]) => mountings(place(order));
  const bound = fewestMountings(plan);
  // Steps that follow never take a mounting back; with controls between them the first steps alone tell nothing.
  const least = controls.length === 0 ? mountings : () => 0;
  const found = rest.length <= MOST_TRIED ? tryAll(rest, cost, least, bound) : betterAll(plan, rest, cost, bound, seed);
  const total = cost(found);
  return {
    seatings: place(found).map((k) => seatings[k]!),
    mountings: total,
    isOptimal: rest.length <= MOST_TRIED || total === bound,
  };
}

/** Controls spread evenly over the order, the first at its start and the last at its end. */
function withControls(order: readonly number[], controls: readonly number[]): number[] {
  if (controls.length === 0) return [...order];
  const gaps = Math.max(1, controls.length - 1);
  const placed: number[] = [];
  controls.forEach((control, c) => {
    const from = c === 0 ? 0 : Math.floor(((c - 1) * order.length) / gaps);
    const to = c === 0 ? 0 : Math.floor((c * order.length) / gaps);
    placed.push(...order.slice(from, to), control);
  });
  if (controls.length === 1) placed.push(...order);
  return placed;
}

type Cost = (order: readonly number[]) => number;

/** Every order, but for those that cannot get below the best found: their first steps alone cost as much. */
function tryAll(items: readonly number[], cost: Cost, costOfStart: Cost, bound: number): number[] {
  let best = [...items];
  let least = cost(best);
  const order: number[] = [];
  const left = new Set(items);
  const descend = () => {
    if (least === bound) return;
    if (left.size === 0) {
      const total = cost(order);
      if (total < least) {
        least = total;
        best = [...order];
      }
      return;
    }
    if (costOfStart(order) >= least) return;
    for (const next of [...left]) {
      order.push(next);
      left.delete(next);
      descend();
      left.add(next);
      order.pop();
    }
  };
  descend();
  return best;
}

/** The better order of several starts. For tests the restarts are told apart from trying all. */
export function betterAll(plan: WalkPlan, items: readonly number[], cost: Cost, bound: number, seed: number): number[] {
  let best = [...items];
  let least = cost(best);
  for (let start = 0; start < RESTARTS && least > bound; start++) {
    const stream = randomStream(seed, start);
    let order = stepByStep(plan, items, stream);
    if (items.length <= MOST_BETTERED) order = bettered(order, cost, bound);
    const total = cost(order);
    if (total < least) {
      least = total;
      best = order;
    }
  }
  return best;
}

/**
 * One seating after the other: the next one shares as much as possible with the bench as it stands, and of equal ones
 * that whose units have the fewest seatings left, so that no unit is left behind.
 */
function stepByStep(plan: WalkPlan, items: readonly number[], stream: RandomStream): number[] {
  const left = new Set(items);
  const open = new Int32Array(plan.places);
  const count = (k: number, change: number) => {
    open[plan.emitter[k]!] = open[plan.emitter[k]!]! + change;
    open[plan.receiver[k]!] = open[plan.receiver[k]!]! + change;
  };
  for (const k of items) count(k, 1);
  const order: number[] = [];
  let last = -1;
  while (left.size > 0) {
    let best = -1;
    let least = Number.POSITIVE_INFINITY;
    for (const k of left) {
      const remaining = Math.min(open[plan.emitter[k]!]!, open[plan.receiver[k]!]!);
      const score = (last < 0 ? 0 : 1e6 * fresh(plan, last, k)) + remaining + stream.uniform();
      if (score < least) {
        least = score;
        best = k;
      }
    }
    order.push(best);
    left.delete(best);
    count(best, -1);
    last = best;
  }
  return order;
}

/** Units that must be mounted for `next` where `last` stands on the bench. */
function fresh({ emitter, receiver, chain }: WalkPlan, last: number, next: number): number {
  if (chain[last] === chain[next]) return 2;
  const on = (place: number) => place === emitter[last] || place === receiver[last];
  return Number(!on(emitter[next]!)) + Number(!on(receiver[next]!));
}

const LONGEST_MOVED = 3;

/** Moves stretches of up to three and reverses stretches as long as that helps. */
function bettered(start: readonly number[], cost: Cost, bound: number): number[] {
  let order = [...start];
  let least = cost(order);
  const tryOrder = (candidate: number[]) => {
    const total = cost(candidate);
    if (total >= least) return false;
    order = candidate;
    least = total;
    return true;
  };
  const oneBetter = (): boolean => {
    const count = order.length;
    for (let length = 1; length <= LONGEST_MOVED; length++) {
      for (let from = 0; from + length <= count; from++) {
        const stretch = order.slice(from, from + length);
        const rest = [...order.slice(0, from), ...order.slice(from + length)];
        for (let to = 0; to <= rest.length; to++) {
          if (to === from) continue;
          if (tryOrder([...rest.slice(0, to), ...stretch, ...rest.slice(to)])) return true;
          if (length > 1 && tryOrder([...rest.slice(0, to), ...[...stretch].reverse(), ...rest.slice(to)])) return true;
        }
      }
    }
    for (let from = 0; from < count - 1; from++) {
      for (let to = from + 2; to <= count; to++) {
        const turned = order.slice(from, to).reverse();
        if (tryOrder([...order.slice(0, from), ...turned, ...order.slice(to)])) return true;
      }
    }
    return false;
  };
  while (least > bound && oneBetter());
  return order;
}

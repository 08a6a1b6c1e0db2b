import type { PlannedSeating } from './design.ts';

/** Seatings with their units as numbers, for walking through them many times. */
export interface WalkPlan {
  /** Places (a unit in one mount) of emitter and receiver of each seating. */
  readonly emitter: Int32Array;
  readonly receiver: Int32Array;
  /** Number of the chain each seating belongs to: emitter, receiver and path. */
  readonly chain: Int32Array;
  readonly places: number;
  readonly chains: number;
}

export function walkPlan(seatings: readonly PlannedSeating[]): WalkPlan {
  const places = new Map<string, number>();
  const chains = new Map<string, number>();
  const numberIn = (numbers: Map<string, number>, key: string) => {
    const number = numbers.get(key) ?? numbers.size;
    numbers.set(key, number);
    return number;
  };
  const placeOf = (unit: string, mount: string) => numberIn(places, JSON.stringify([unit, mount]));
  const emitter = Int32Array.from(seatings, (s) => placeOf(s.emitter, s.emitterMount));
  const receiver = Int32Array.from(seatings, (s) => placeOf(s.receiver, s.receiverMount));
  const chain = Int32Array.from(seatings, (s, k) => numberIn(chains, `${emitter[k]} ${receiver[k]} ${s.path}`));
  return { emitter, receiver, chain, places: places.size, chains: chains.size };
}

/** Which seating of its place is in force at each step, counted from 1. */
export interface SeatingNumbers {
  readonly emitter: Int32Array;
  readonly receiver: Int32Array;
}

/** Goes through the seatings of a plan in an order. */
export interface Walker {
  /** Acts of mounting in all, those of the first pair included. `numbers` is filled where it is given. */
  readonly mountings: (order: ArrayLike<number>, numbers?: SeatingNumbers) => number;
}

/**
 * A unit that is on the bench stays as it is if the next seating needs it, in either role; only where a chain comes again
 * is each of its ends mounted anew, since the same mounting would be no new seating.
 */
export function walker(plan: WalkPlan): Walker {
  const count = new Int32Array(plan.places);
  const lastEmitter = new Int32Array(plan.chains);
  const lastReceiver = new Int32Array(plan.chains);
  return {
    mountings(order, numbers) {
      count.fill(0);
      lastEmitter.fill(0);
      lastReceiver.fill(0);
      let mountings = 0;
      let here = -1;
      let there = -1;
      for (let step = 0; step < order.length; step++) {
        const k = order[step]!;
        const emitter = plan.emitter[k]!;
        const receiver = plan.receiver[k]!;
        const chain = plan.chain[k]!;
        const emitterStays = (emitter === here || emitter === there) && count[emitter] !== lastEmitter[chain];
        const receiverStays = (receiver === here || receiver === there) && count[receiver] !== lastReceiver[chain];
        if (!emitterStays) {
          count[emitter] = count[emitter]! + 1;
          mountings++;
        }
        if (!receiverStays && receiver !== emitter) {
          count[receiver] = count[receiver]! + 1;
          mountings++;
        }
        lastEmitter[chain] = count[emitter]!;
        lastReceiver[chain] = count[receiver]!;
        if (numbers !== undefined) {
          numbers.emitter[step] = count[emitter]!;
          numbers.receiver[step] = count[receiver]!;
        }
        here = emitter;
        there = receiver;
      }
      return mountings;
    },
  };
}

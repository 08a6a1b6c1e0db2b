import { bySession } from './costs.ts';
import type { PlannedSeating } from './design.ts';
import { walker, walkPlan } from './mounting-walk.ts';

/**
 * The seatings that are still to come, in their order, with seating numbers as the bench is really mounted: a unit that the
 * next seating needs stays as it is. Numbers are counted for each unit.
 * @param from seating numbers that units have already.
 */
export function asMounted(
  seatings: readonly PlannedSeating[],
  from: ReadonlyMap<string, number>,
): readonly PlannedSeating[] {
  const last = new Map(from);
  return bySession(seatings.filter(({ kind }) => kind !== 'made')).flatMap((own) => {
    const numbers = { emitter: new Int32Array(own.length), receiver: new Int32Array(own.length) };
    walker(walkPlan(own)).mountings([...own.keys()], numbers);
    // The walk counts for each place of a session from 1; a unit with several mounts goes on counting over them.
    const known = new Map<string, string>();
    const label = (unit: string, mount: string, number: number) => {
      const key = JSON.stringify([unit, mount, number]);
      const there = known.get(key);
      if (there !== undefined) return there;
      const next = (last.get(unit) ?? 0) + 1;
      last.set(unit, next);
      known.set(key, String(next));
      return String(next);
    };
    return own.map((seating, k) => ({
      ...seating,
      emitterSeating: label(seating.emitter, seating.emitterMount, numbers.emitter[k]!),
      receiverSeating: label(seating.receiver, seating.receiverMount, numbers.receiver[k]!),
    }));
  });
}

/** The same with both units mounted anew for every seating. */
export function mountedAnew(
  seatings: readonly PlannedSeating[],
  from: ReadonlyMap<string, number>,
): readonly PlannedSeating[] {
  const last = new Map(from);
  const next = (unit: string) => {
    const number = (last.get(unit) ?? 0) + 1;
    last.set(unit, number);
    return String(number);
  };
  return seatings
    .filter(({ kind }) => kind !== 'made')
    .map((seating) => {
      const emitterSeating = next(seating.emitter);
      const isTwin = seating.emitter === seating.receiver && seating.emitterMount === seating.receiverMount;
      return { ...seating, emitterSeating, receiverSeating: isTwin ? emitterSeating : next(seating.receiver) };
    });
}

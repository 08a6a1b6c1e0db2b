import type { TakeSet } from '../takes/take-set.ts';
import { type Design, type PlannedSeating, seatingOf, unitsNamed } from './design.ts';

/**
 * The takes of a run as a design, all of them made already.
 * @param without indices of takes that the solution left out.
 */
export function designOfRun(name: string, { takes }: TakeSet, without: ReadonlySet<number>): Design {
  const found = new Map<string, PlannedSeating>();
  takes.forEach((take, t) => {
    if (without.has(t)) return;
    const { emitter, receiver, emitterMount, receiverMount, path, session, emitterSeating, receiverSeating } = take;
    const key = JSON.stringify([
      emitter,
      receiver,
      emitterMount,
      receiverMount,
      path,
      session,
      emitterSeating,
      receiverSeating,
    ]);
    const seating = found.get(key);
    const repeats = (seating?.repeats ?? 0) + 1;
    const labels = { emitterMount, receiverMount, path, session, emitterSeating, receiverSeating };
    found.set(key, seatingOf(emitter, receiver, { ...labels, repeats, kind: 'made' }));
  });
  const seatings = [...found.values()];
  const all = takes.map(({ emitter, receiver }) => seatingOf(emitter, receiver));
  return { name, units: unitsNamed(all), seatings, forbidden: [] };
}

/** The highest seating number that a run gave each unit: new seatings count on from it. */
export function lastSeatings({ takes }: TakeSet): Map<string, number> {
  const last = new Map<string, number>();
  const note = (unit: string, label: string) => {
    if (/^\d{1,6}$/.test(label)) last.set(unit, Math.max(last.get(unit) ?? 0, Number(label)));
  };
  for (const take of takes) {
    note(take.emitter, take.emitterSeating);
    note(take.receiver, take.receiverSeating);
  }
  return last;
}

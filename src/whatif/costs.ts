import { countTakes, type PlannedSeating } from './design.ts';
import { walker, walkPlan } from './mounting-walk.ts';

/** Minutes of bench work. */
export interface BenchTimes {
  /** One take. */
  readonly take: number;
  /** Mounting one unit. */
  readonly reseat: number;
}

/** What a unit's mounting and a take last where nobody says otherwise. Common practice, no source. */
export const DEFAULT_TIMES: BenchTimes = { take: 3, reseat: 5 };

export interface BenchCost {
  readonly takes: number;
  /** Acts of mounting one unit. */
  readonly mountings: number;
  readonly minutes: number;
}

/** What the seatings that are still to come cost in the order given, mounted as their labels say. */
export function costOf(seatings: readonly PlannedSeating[], times: BenchTimes): BenchCost {
  const due = seatings.filter(({ kind }) => kind !== 'made');
  const mountings = mountingsBefore(due).reduce((sum, units) => sum + units.length, 0);
  const atTakes = due.reduce((sum, { minutes, repeats }) => sum + repeats * (minutes ?? times.take), 0);
  return { takes: countTakes(due), mountings, minutes: atTakes + mountings * times.reseat };
}

/**
 * Units that are mounted before each seating, as `S1` or `S1@clamped`: both, unless a unit stands on the bench with the
 * same seating label.
 */
export function mountingsBefore(seatings: readonly PlannedSeating[]): string[][] {
  let onBench = new Map<string, string | undefined>();
  let session: string | undefined;
  return seatings.map((seating) => {
    if (seating.session !== session) onBench = new Map();
    session = seating.session;
    const now = new Map([
      [placeName(seating.emitter, seating.emitterMount), seating.emitterSeating],
      [placeName(seating.receiver, seating.receiverMount), seating.receiverSeating],
    ]);
    const mounted = [...now].filter(([place, label]) => label === undefined || onBench.get(place) !== label);
    onBench = now;
    return mounted.map(([place]) => place);
  });
}

function placeName(unit: string, mount: string): string {
  return mount === '' ? unit : `${unit}@${mount}`;
}

/** Acts of mounting in the order given, where a unit that is needed next stays on the bench. */
export function mountingsInOrder(seatings: readonly PlannedSeating[]): number {
  return walker(walkPlan(seatings)).mountings([...seatings.keys()]);
}

/** Seatings of each session, sessions in the order they are first named: a new one starts with an empty bench. */
export function bySession(seatings: readonly PlannedSeating[]): PlannedSeating[][] {
  const sessions = new Map<string, PlannedSeating[]>();
  for (const seating of seatings) {
    const own = sessions.get(seating.session);
    if (own === undefined) sessions.set(seating.session, [seating]);
    else own.push(seating);
  }
  return [...sessions.values()];
}

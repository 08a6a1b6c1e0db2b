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

/** What the seatings cost in the order given, session by session; those that were made already cost nothing. */
export function costOf(seatings: readonly PlannedSeating[], times: BenchTimes): BenchCost {
  const due = seatings.filter(({ kind }) => kind !== 'made');
  const mountings = bySession(due).reduce((sum, own) => sum + mountingsInOrder(own), 0);
  const atTakes = due.reduce((sum, { minutes, repeats }) => sum + repeats * (minutes ?? times.take), 0);
  return { takes: countTakes(due), mountings, minutes: atTakes + mountings * times.reseat };
}

/** Acts of mounting in the order given. */
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

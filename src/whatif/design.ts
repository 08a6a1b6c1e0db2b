/**
 * One act of mounting a pair, as planned, with the takes made before anything is touched again. An empty label means
 * 'not told apart'.
 */
export interface PlannedSeating {
  readonly emitter: string;
  readonly receiver: string;
  readonly emitterMount: string;
  readonly receiverMount: string;
  readonly path: string;
  readonly session: string;
  /** Takes of the seating, at least 1. */
  readonly repeats: number;
  /** Minutes that one take lasts; absent where the general figure holds. */
  readonly minutes: number | undefined;
  /**
   * Which seating of the unit it is: the same label twice, and the unit stays mounted in between. Absent: both units are
   * mounted anew for this seating alone.
   */
  readonly emitterSeating: string | undefined;
  readonly receiverSeating: string | undefined;
  /** `made`: taken already; `added`: suggested; `control`: the same pair at start, middle and end of the run. */
  readonly kind: 'planned' | 'made' | 'added' | 'control';
}

/** Two units, in either order. */
export type UnitPair = readonly [string, string];

/** A plan of takes. Needs no data: what it will deliver depends on what is taken against what. */
export interface Design {
  /** As a reader finds it again: a file, or a phrase such as `all, 6 units`. */
  readonly name: string;
  /** All units that may be taken, in the order they were named. */
  readonly units: readonly string[];
  readonly seatings: readonly PlannedSeating[];
  readonly forbidden: readonly UnitPair[];
}

/** A seating of two units, both mounted for it alone, with nothing said of mounts, path or session. */
export function seatingOf(
  emitter: string,
  receiver: string,
  more: Partial<Omit<PlannedSeating, 'emitter' | 'receiver'>> = {},
): PlannedSeating {
  return {
    emitter,
    receiver,
    emitterMount: '',
    receiverMount: '',
    path: '',
    session: '',
    repeats: 1,
    minutes: undefined,
    emitterSeating: undefined,
    receiverSeating: undefined,
    kind: 'planned',
    ...more,
  };
}

/** The same text for a pair in either order. */
export function pairKey(one: string, other: string): string {
  return JSON.stringify(one < other ? [one, other] : [other, one]);
}

/** Units of the seatings in the order they are first named. */
export function unitsNamed(seatings: readonly PlannedSeating[]): string[] {
  return [...new Set(seatings.flatMap(({ emitter, receiver }) => [emitter, receiver]))];
}

/** Takes of a design: repeats count each. */
export function countTakes(seatings: readonly PlannedSeating[]): number {
  return seatings.reduce((sum, { repeats }) => sum + repeats, 0);
}

import { mountingsBefore } from './costs.ts';
import type { PlannedSeating } from './design.ts';

/** One take of a run sheet. */
export interface SheetTake {
  /** Counted from 1, in the order of the run. */
  readonly number: number;
  readonly seating: PlannedSeating;
  readonly emitterSeating: string;
  readonly receiverSeating: string;
  /** Counted from 1. */
  readonly repeat: number;
  /** Units that are mounted before this take: none where the bench stays as it is. */
  readonly mounts: readonly string[];
  /** Where its spectrum goes, for sheets that name files. */
  readonly file: string;
}

/**
 * The takes of a run in the order of the seatings.
 * @param seatings those to come, with seating numbers: see `asMounted`, which makes the sheet, filled in, tell the solver
 * what was mounted anew.
 */
export function runSheet(seatings: readonly PlannedSeating[]): SheetTake[] {
  const due = seatings.filter(({ kind }) => kind !== 'made');
  const mounts = mountingsBefore(due);
  const takes: SheetTake[] = [];
  due.forEach((seating, k) => {
    for (let repeat = 1; repeat <= seating.repeats; repeat++) {
      const number = takes.length + 1;
      takes.push({
        number,
        seating,
        emitterSeating: seating.emitterSeating ?? '',
        receiverSeating: seating.receiverSeating ?? '',
        repeat,
        mounts: repeat === 1 ? mounts[k]! : [],
        file: fileName(number, seating),
      });
    }
  });
  return takes;
}

/** `take-007-S1-S2.csv`: the number keeps names apart where units differ in signs that files cannot have. */
function fileName(number: number, { emitter, receiver }: PlannedSeating): string {
  const safe = (unit: string) => unit.replace(/[^\p{L}\p{N}_-]+/gu, '').slice(0, 24);
  const parts = ['take', String(number).padStart(3, '0'), safe(emitter), safe(receiver)];
  return `${parts.filter((part) => part !== '').join('-')}.csv`;
}

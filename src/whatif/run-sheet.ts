import { bySession } from './costs.ts';
import type { PlannedSeating } from './design.ts';
import { walker, walkPlan } from './mounting-walk.ts';

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
 * The takes of a run in the order of the seatings, with seating numbers counted for each unit as the bench is really
 * mounted, so that the sheet, filled in, tells the solver what was mounted anew.
 * @param from seating numbers that units have already.
 */
export function runSheet(seatings: readonly PlannedSeating[], from: ReadonlyMap<string, number>): SheetTake[] {
  const last = new Map(from);
  const takes: SheetTake[] = [];
  for (const own of bySession(seatings.filter(({ kind }) => kind !== 'made'))) {
    const numbers = { emitter: new Int32Array(own.length), receiver: new Int32Array(own.length) };
    walker(walkPlan(own)).mountings([...own.keys()], numbers);
    const before = new Map(last);
    const label = (unit: string, number: number) => {
      const seating = (before.get(unit) ?? 0) + number;
      last.set(unit, Math.max(last.get(unit) ?? 0, seating));
      return String(seating);
    };
    let onBench = new Map<string, string>();
    own.forEach((seating, k) => {
      const emitterSeating = label(seating.emitter, numbers.emitter[k]!);
      const receiverSeating = label(seating.receiver, numbers.receiver[k]!);
      const now = new Map([
        [placeName(seating.emitter, seating.emitterMount), emitterSeating],
        [placeName(seating.receiver, seating.receiverMount), receiverSeating],
      ]);
      const mounts = [...now].filter(([place, number]) => onBench.get(place) !== number).map(([place]) => place);
      onBench = now;
      for (let repeat = 1; repeat <= seating.repeats; repeat++) {
        const number = takes.length + 1;
        takes.push({
          number,
          seating,
          emitterSeating,
          receiverSeating,
          repeat,
          mounts: repeat === 1 ? mounts : [],
          file: fileName(number, seating),
        });
      }
    });
  }
  return takes;
}

function placeName(unit: string, mount: string): string {
  return mount === '' ? unit : `${unit}@${mount}`;
}

/** `take-007-S1-S2.csv`: the number keeps names apart where units differ in signs that files cannot have. */
function fileName(number: number, { emitter, receiver }: PlannedSeating): string {
  const safe = (unit: string) => unit.replace(/[^\p{L}\p{N}_-]+/gu, '').slice(0, 24);
  const parts = ['take', String(number).padStart(3, '0'), safe(emitter), safe(receiver)];
  return `${parts.filter((part) => part !== '').join('-')}.csv`;
}

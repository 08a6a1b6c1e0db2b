import type { Planned } from './planned-takes.ts';
import type { SimulationOptions } from './simulation-options.ts';

/** A fault to plant. Takes are indices into the simulated takes, units indices from 0. */
export type PlantedFault =
  | { readonly kind: 'moved gain'; readonly take: number; readonly db: number }
  /** The take says what was planned; in truth `unit` stood where it names another one. */
  | {
      readonly kind: 'exchanged label';
      readonly take: number;
      readonly end: 'emitter' | 'receiver';
      readonly unit: number;
    }
  /** Half a sine over log frequency from `from` to `to` in hertz, `db` at its middle. */
  | {
      readonly kind: 'local bump';
      readonly take: number;
      readonly from: number;
      readonly to: number;
      readonly db: number;
    }
  /** Emitter and receiver changed places; nothing to see in the reciprocal model, where this is refused. */
  | { readonly kind: 'direction reversed'; readonly take: number }
  /** A straight line over log frequency that is 0 at the middle of the range. */
  | { readonly kind: 'slope'; readonly take: number; readonly dbPerOctave: number }
  /** White noise beside the repeat scatter. */
  | { readonly kind: 'scatter'; readonly take: number; readonly db: number }
  /** A unit whose response, in all roles, is `db` higher from the take `fromTake` on. */
  | { readonly kind: 'drifted unit'; readonly unit: number; readonly fromTake: number; readonly db: number }
  /**
   * A resonance in the middle of `from` to `to` (hertz) whose centre has the relative standard deviation `percent` over
   * the unit's partners; by 12 dB it stands above what is around it. It is part of the unit's true response, at the mean.
   */
  | {
      readonly kind: 'shifting resonance';
      readonly unit: number;
      readonly from: number;
      readonly to: number;
      readonly percent: number;
    };

/** Decibels that faults add to take `take` at each frequency, scatter apart. */
export function addedByFaults(faults: readonly PlantedFault[], take: number, frequencies: Float64Array): Float64Array {
  const middle = Math.sqrt(frequencies[0]! * frequencies.at(-1)!);
  const added = new Float64Array(frequencies.length);
  for (const fault of faults) {
    if (!('take' in fault) || fault.take !== take) continue;
    for (let f = 0; f < added.length; f++) added[f] = added[f]! + addedAt(fault, frequencies[f]!, middle);
  }
  return added;
}

function addedAt(fault: PlantedFault, frequency: number, middle: number): number {
  switch (fault.kind) {
    case 'moved gain':
      return fault.db;
    case 'slope':
      return fault.dbPerOctave * Math.log2(frequency / middle);
    case 'local bump': {
      const along = Math.log(frequency / fault.from) / Math.log(fault.to / fault.from);
      return along > 0 && along < 1 ? fault.db * Math.sin(Math.PI * along) : 0;
    }
    default:
      return 0;
  }
}

/** What stood on the bench in a take, whatever the take says; a unit under another's name sits in its uncounted seating, 0. */
export function madeWith(take: Planned, index: number, faults: readonly PlantedFault[]): Planned {
  let really = take;
  for (const fault of faults) {
    if (!('take' in fault) || fault.take !== index) continue;
    if (fault.kind === 'exchanged label') {
      really =
        fault.end === 'emitter'
          ? { ...really, emitter: fault.unit, emitterSeating: 0 }
          : { ...really, receiver: fault.unit, receiverSeating: 0 };
    }
    if (fault.kind === 'direction reversed') {
      really = {
        ...really,
        emitter: really.receiver,
        receiver: really.emitter,
        emitterSeating: really.receiverSeating,
        receiverSeating: really.emitterSeating,
      };
    }
  }
  return really;
}

/** Decibels by which a unit has drifted in a take. */
export function drift(faults: readonly PlantedFault[], unit: number, take: number): number {
  return faults.reduce(
    (sum, f) => (f.kind === 'drifted unit' && f.unit === unit && take >= f.fromTake ? sum + f.db : sum),
    0,
  );
}

/** Indices of the takes that a fault touches, ascending. */
export function takesTouched(fault: PlantedFault, takes: readonly Planned[]): number[] {
  if ('take' in fault) return [fault.take];
  const from = fault.kind === 'drifted unit' ? fault.fromTake : 0;
  return takes.flatMap(({ emitter, receiver }, t) =>
    t >= from && (emitter === fault.unit || receiver === fault.unit) ? [t] : [],
  );
}

/** Throws a RangeError for a fault that names a take or unit that is not there, or that cannot show. */
export function refuseImpossible(faults: readonly PlantedFault[], options: SimulationOptions, takes: number): void {
  for (const fault of faults) {
    const take = 'take' in fault ? fault.take : fault.kind === 'drifted unit' ? fault.fromTake : 0;
    const unit = 'unit' in fault ? fault.unit : 0;
    const hidden = fault.kind === 'direction reversed' && options.model !== 'directional';
    if (!(take >= 0 && take < takes) || !(unit >= 0 && unit < options.units) || hidden) {
      throw new RangeError(`cannot plant ${JSON.stringify(fault)} in ${takes} takes of ${options.units} units`);
    }
  }
}

import type { PlantedFault } from './planted-faults.ts';

/** What to simulate. Scatters are standard deviations in dB; every one is 0 unless given. */
export interface SimulationOptions {
  readonly seed: number;
  /** Number of units; they are named U01, U02 and so on. */
  readonly units: number;
  /** Emitter and receiver as indices from 0; absent for all pairs i < j once. */
  readonly pairs?: readonly (readonly [number, number])[];
  /** Each take is followed by one the other way round in the same seatings. */
  readonly bothWays?: boolean;
  /** Mountings of each pair (1 unless given). */
  readonly seatings?: number;
  /** Takes of each mounting (1 unless given). */
  readonly repeats?: number;
  /** Whether both units are mounted anew for each pair, or each unit once in a round through all pairs. */
  readonly mounted?: 'for each pair' | 'for each round';
  /** Whether rounds are told apart by seating labels, or by session labels with no seatings noted. */
  readonly labels?: 'seatings' | 'sessions';
  /** Hertz, ascending; absent for 60 frequencies from 10 kHz to 320 kHz. */
  readonly frequencies?: Float64Array;
  /** White, one reading. */
  readonly repeatScatter?: number;
  /** A pair mounted again; each unit's seating holds half of the variance. Smooth along frequency. */
  readonly reseatScatter?: number;
  /** What two units do to each other, the same in all their takes and both ways. Smooth along frequency. */
  readonly partnerScatter?: number;
  /** Octaves at which the correlation of smooth scatter is 1/e; 0 for white (0.5 unless given). */
  readonly correlation?: number;
  /** Relative standard deviation, from seating to seating, of the resonances' centres and qualities; beside `reseatScatter`. */
  readonly centreWander?: number;
  readonly qualityWander?: number;
  readonly model?: 'reciprocal' | 'directional';
  /** Decibels by which a round's gain is off; one a seating. */
  readonly gains?: readonly number[];
  /** Whether the set states the repeat scatter as each reading's own uncertainty. */
  readonly ownUncertainty?: boolean;
  readonly faults?: readonly PlantedFault[];
}

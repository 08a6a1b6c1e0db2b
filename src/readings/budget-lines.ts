import type { Place } from '../quantity/place.ts';

/** Which takes a systematic effect reaches. Each of the kinds without a label has an effect of its own for every label. */
export type BudgetTarget = 'all' | 'emitter' | 'receiver' | 'session' | 'path' | 'unit';

/** Shape of what is known about an effect, as a Monte Carlo run draws it. */
export type Distribution = 'normal' | 'rectangular' | 'triangular' | 'u-shaped';

/** A systematic effect that the takes themselves do not show, with its standard uncertainty. */
export interface BudgetLine {
  readonly name: string;
  readonly place: Place;
  /** Standard uncertainty in dB, above 0. */
  readonly uncertainty: number;
  readonly distribution: Distribution;
  /** Above 0; Infinity where the uncertainty counts as known. */
  readonly dof: number;
  /** A: from a statistical analysis of readings; B: from other knowledge (JCGM 100:2008, 2.3.2 and 2.3.3). */
  readonly type: 'A' | 'B';
  readonly target: BudgetTarget;
  /** Empty for every label of the kind. */
  readonly label: string;
  /** Hertz, both ends included; 0 and Infinity where the line names none. */
  readonly from: number;
  readonly to: number;
}

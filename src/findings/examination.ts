import type { ScatterStep } from '../estimate/scatter-step.ts';
import type { LinkStatus } from '../model/separability.ts';
import type { ChangedUnit } from './changed-units.ts';
import type { ExplainedTake } from './explanations.ts';
import type { FailingBand } from './failing-bands.ts';
import type { HoldFinding } from './holds.ts';
import type { LevelMisfit } from './level-misfit.ts';
import type { LookalikeFinding } from './lookalike-test.ts';
import type { LoopFindings } from './loops.ts';
import type { MountDifference } from './mount-differences.ts';
import type { ReciprocityFindings } from './reciprocity-bands.ts';
import type { WholeSetFindings } from './whole-set.ts';

/** A stretch of frequencies with a mean level in it. */
export interface BandLevel {
  /** Hertz. */
  readonly from: number;
  readonly to: number;
  /** Decibels. */
  readonly level: number;
}

/** How one take agrees with the rest. Numbers are NaN where nothing can be said. */
export interface TakeFinding {
  /** Index into the takes. */
  readonly take: number;
  readonly readings: number;
  readonly rmsResidual: number;
  /**
   * Constant by which the take stands off what all other takes say of it, in dB, and its standard uncertainty from the
   * scatter of repeats, seatings and partners.
   */
  readonly offset: number;
  readonly offsetUncertainty: number;
  /** Smallest constant shift that the test would find, in dB, at the risk and power of `thresholds.ts`. */
  readonly smallestShift: number;
  /** The third-octave band with the largest mean residual; absent where there are no readings. */
  readonly worst: BandLevel | undefined;
  /** Mean redundancy of the take's readings: 0 means that nothing checks it; NaN where it was left out. */
  readonly redundancy: number;
  /** Corrected for the number of tests and takes. */
  readonly pValue: number;
  readonly verdict: TakeVerdict;
  /** Whether it was kept out of the solution. */
  readonly isLeftOut: boolean;
  /** Other takes that could be at fault in its place. */
  readonly tiedWith: readonly number[];
  /** What it reads like; absent unless flagged or tied. */
  readonly explained: ExplainedTake | undefined;
  /** The take that would check it, or settle the tie; absent where none is needed or none can be named. */
  readonly cure: ExtraTake | undefined;
}

/** `not tested`: no scatter is known to test with. */
export type TakeVerdict = 'agrees' | 'flagged' | 'tied' | 'uncheckable' | 'not tested';

/** The same over all takes of an emitter and a receiver. */
export interface PairFinding {
  readonly emitter: string;
  readonly receiver: string;
  readonly takes: readonly number[];
  readonly rmsResidual: number;
  readonly offset: number;
  readonly redundancy: number;
  /** The smallest of its takes, and the verdict of the worst. */
  readonly pValue: number;
  readonly verdict: TakeVerdict;
}

/** One reported response in figures for a summary. */
export interface UnitFinding {
  /** Index into `Model.responses`. */
  readonly response: number;
  /** Median level over the frequencies at which it is known, in dB. */
  readonly medianLevel: number;
  /** Median standard and expanded uncertainty in dB; NaN where there is none. */
  readonly medianUncertainty: number;
  readonly medianExpanded: number;
  /** Median standard uncertainty in dB for the unit seated again, and seated again on another partner; NaN where not known. */
  readonly medianReseatUncertainty: number;
  readonly medianPartnerUncertainty: number;
  /** Number of frequencies with each status. */
  readonly counts: Readonly<Record<LinkStatus, number>>;
  /** True where no reading of this response has redundancy: nothing checks it. */
  readonly unchecked: boolean;
}

/** One extra take that would take away a freedom, as unit names (with `@mount` where mounts are told apart). */
export interface ExtraTake {
  readonly emitter: string;
  readonly receiver: string;
  /** The path it must go over; empty where any will do. */
  readonly path: string;
}

/** Stands in an extra take for a unit that is not in the set. */
export const THIRD_UNIT = 'a third unit';

/** Why something cannot be told apart. */
export type OpenKind =
  /** Reciprocal model: the part has no odd loop and nothing known. Sums across its two sides and differences within one are known. */
  | 'no odd loop'
  /** Nothing was measured of the response at these frequencies. */
  | 'not measured'
  /** Directional model: one constant of the part is fixed by convention. Sums emit + receive are known. */
  | 'one constant'
  /** The level of a path cannot be told from the units. */
  | 'path'
  /** A session's gain is 0 dB by convention, since the takes leave it open. */
  | 'gain';

/** What cannot be told apart, with its cure. The same freedom at several frequencies is one finding. */
export interface OpenFinding {
  readonly kind: OpenKind;
  /** `datum`: a convention stands for it; `open`: nothing does, and the responses have no level. */
  readonly status: 'datum' | 'open';
  /** Names of the links that it moves, as in `Link.name`. */
  readonly responses: readonly string[];
  /** Those that move up and those that move down together; absent for a path or a gain. */
  readonly sides: readonly [readonly string[], readonly string[]] | undefined;
  /** What the convention says; empty where there is none. */
  readonly convention: string;
  /** Indices of the frequencies concerned, ascending. */
  readonly frequencies: readonly number[];
  /**
   * The cheapest extra takes that would settle it together. Empty where no take can: one constant of a directional part
   * needs a reference or a reversible unit, a single session's gain a second session over the same pairs.
   */
  readonly extraTakes: readonly ExtraTake[];
}

/** The whole set against its uncertainties. */
export interface WholeFinding {
  /** Root mean square of all residuals, in dB. */
  readonly rmsResidual: number;
  /** Residual standard deviation: √(Σ residual² / degrees of freedom), in dB; NaN without degrees of freedom. */
  readonly residualDeviation: number;
  readonly degreesOfFreedom: number;
  /** Σ (residual/u)² per degree of freedom: 1 where the uncertainties explain the residuals; NaN where u comes from them or is absent. */
  readonly chiSquarePerDof: number;
  /** More takes disagree than can be left out: the additive model itself fails. */
  readonly isModelFailing: boolean;
}

/** Everything the solution says of takes, pairs and units, as plain records; sentences are made of them in the report. */
export interface Examination {
  readonly takes: readonly TakeFinding[];
  readonly pairs: readonly PairFinding[];
  readonly units: readonly UnitFinding[];
  readonly open: readonly OpenFinding[];
  readonly holds: readonly HoldFinding[];
  /** Declared look-alikes held against each other; empty where none were declared. */
  readonly lookalikes: readonly LookalikeFinding[];
  /** Bands in which the additive model itself fails. */
  readonly failing: readonly FailingBand[];
  /** Units whose level is another one from some take on, the surest first. */
  readonly changed: readonly ChangedUnit[];
  /** The ladder of scatter, a third-octave band each. */
  readonly scatter: readonly ScatterStep[];
  /** Differences between mounts of one unit; empty where no unit has two. */
  readonly mounts: readonly MountDifference[];
  /** Even closed walks of pairs, which must close whatever the units are. */
  readonly loops: LoopFindings;
  /** Misfit that depends on the level: saturation, noise floor. */
  readonly levels: LevelMisfit;
  readonly reciprocity: ReciprocityFindings;
  /** The whole set per third-octave band. */
  readonly bands: WholeSetFindings;
  readonly whole: WholeFinding;
}

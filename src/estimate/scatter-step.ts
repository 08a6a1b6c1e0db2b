export type LadderStep = 'repeat' | 'reseat' | 'partner';

/** Scatter that one step of the ladder adds. A step that the data cannot show has NaN throughout and dof 0, never 0 dB. */
export interface StepScatter {
  /** Standard deviation in dB. 0 where the step shows no more scatter than the steps below it; then `high` says how much it may be. */
  readonly sd: number;
  /** Degrees of freedom of its square (Satterthwaite); where sd is 0, those of the mean square that showed nothing. */
  readonly dof: number;
  /** Ends of the confidence interval of the standard deviation, in dB. */
  readonly low: number;
  readonly high: number;
  /** Steps below that the data cannot tell from this one, so that their scatter is in it. */
  readonly includes: readonly LadderStep[];
}

/**
 * The highest step that stands out from the step below it.
 * `not testable`: no step can be held against a step below; `none shown`: none stands out;
 * `reseat or partner`: pairs differ by more than repeats explain, and as no pair was mounted again nobody can tell which.
 */
export type LadderVerdict = 'not testable' | 'none shown' | 'reseat' | 'partner' | 'reseat or partner';

/** The ladder of scatter in one third-octave band. F and p are NaN where a test cannot be made. */
export interface ScatterStep {
  /** Hertz. */
  readonly from: number;
  readonly to: number;
  /** Same seating, taken again. */
  readonly repeat: StepScatter;
  /** Same pair, mounted again. */
  readonly reseat: StepScatter;
  /** The pair itself: what its mean stands off the additive model. */
  readonly partner: StepScatter;
  /** Reseat against repeat. */
  readonly fReseat: number;
  readonly pReseat: number;
  /** Partner against `partnerAgainst`. */
  readonly fPartner: number;
  readonly pPartner: number;
  readonly partnerAgainst: 'repeat' | 'reseat' | undefined;
  /** How the standard deviations were estimated; absent where there is none. */
  readonly method: 'nested analysis of variance' | 'restricted maximum likelihood' | undefined;
  /** Rests on p values corrected for the number of bands (Holm); the p values here are not. */
  readonly verdict: LadderVerdict;
}

export const NOT_TESTABLE: StepScatter = {
  sd: Number.NaN,
  dof: 0,
  low: Number.NaN,
  high: Number.NaN,
  includes: [],
};

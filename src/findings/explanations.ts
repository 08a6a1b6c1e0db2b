/** What the deviation of a take looks like. Levels and shifts in dB, frequencies in hertz. */
export type Explanation =
  | { readonly kind: 'moved gain'; readonly shift: number; readonly uncertainty: number; readonly dof: number }
  | { readonly kind: 'slope'; readonly perDecade: number; readonly uncertainty: number; readonly shift: number }
  | {
      readonly kind: 'local';
      readonly from: number;
      readonly to: number;
      readonly centre: number;
      /** At the centre; negative for a dip. */
      readonly height: number;
      readonly uncertainty: number;
    }
  /** No shape: more noise than other takes have, by this factor. */
  | { readonly kind: 'scatter'; readonly factor: number }
  /** The take was made with `unit` in the place of its emitter or receiver. */
  | { readonly kind: 'another label'; readonly end: 'emitter' | 'receiver'; readonly unit: string }
  | { readonly kind: 'direction reversed' };

/** Explanations of one take, best first. */
export interface ExplainedTake {
  readonly take: number;
  /** Empty where the deviation is known at no frequency. */
  readonly ranked: readonly RankedExplanation[];
  /** The deviation that is explained: shift at each frequency with its standard uncertainty in dB, NaN where not known. */
  readonly deviation: Float64Array;
  readonly uncertainty: Float64Array;
}

export interface RankedExplanation {
  readonly explanation: Explanation;
  /** Bayesian information criterion less that of the first explanation; below 0 for one that only adds to the first. */
  readonly behind: number;
  /** Whether the data do not tell it from the best one. */
  readonly isEquallyGood: boolean;
  /** What the explanation says of the deviation at each frequency, in dB. */
  readonly curve: Float64Array;
}

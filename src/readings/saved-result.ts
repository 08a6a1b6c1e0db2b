/** A response of a result, by what its tables call it. */
export interface SavedResponse {
  readonly unit: string;
  /** Empty where no mounts are told apart. */
  readonly mount: string;
  readonly role: 'emit' | 'receive' | 'both';
}

/**
 * What a result folder says of its responses. R responses, F frequencies; entry (f, r) of an array stands at f · R + r.
 * NaN means 'not available'.
 */
export interface SavedResult {
  readonly responses: readonly SavedResponse[];
  /** Hertz, ascending. */
  readonly frequencies: Float64Array;
  /** Decibels. */
  readonly levels: Float64Array;
  /** Standard uncertainties in dB: as seated, seated again, on another partner. */
  readonly uncertainty: Float64Array;
  readonly reseat: Float64Array;
  readonly partner: Float64Array;
  readonly dof: Float64Array;
  /** Whether a level rests on a datum. */
  readonly isDatum: readonly boolean[];
  /** Covariance in dB² of two responses at a frequency, by indices; NaN where there is none. */
  readonly covariance: (frequency: number, a: number, b: number) => number;
  /** Coverage probability of the result. */
  readonly coverage: number;
}

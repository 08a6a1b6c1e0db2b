/** A certificate's value of one unit: entries belong to each other, frequencies ascending. */
export interface Reference {
  readonly unit: string;
  /** Empty where the certificate names none. */
  readonly mount: string;
  readonly role: 'emit' | 'receive' | 'both';
  /** Hertz. */
  readonly frequency: Float64Array;
  /** Decibels. */
  readonly level: Float64Array;
  /** Standard uncertainty in dB, above 0. */
  readonly uncertainty: Float64Array;
}

/** A path's level by frequency, frequencies ascending. */
export interface PathLevel {
  readonly path: string;
  /** Hertz. */
  readonly frequency: Float64Array;
  /** Decibels. */
  readonly level: Float64Array;
  /** Standard uncertainty in dB; NaN where none is given: the level then counts as exact. */
  readonly uncertainty: Float64Array;
}

import type { Place } from '../quantity/place.ts';

/** A certificate's value of one unit: entries belong to each other, frequencies ascending. */
export interface Reference {
  readonly unit: string;
  /** Empty where the certificate names none. */
  readonly mount: string;
  readonly role: 'emit' | 'receive' | 'both';
  /** Its first row, or where else it comes from. */
  readonly place: Place;
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
  /** Its first row, or where else it comes from. */
  readonly place: Place;
  /** Hertz. */
  readonly frequency: Float64Array;
  /** Decibels. */
  readonly level: Float64Array;
  /** Standard uncertainty in dB for all of them, or NaN for all of them: the level then counts as exact. */
  readonly uncertainty: Float64Array;
}

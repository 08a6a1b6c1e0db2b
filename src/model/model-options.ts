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

/** A path's level by frequency. */
export interface PathLevel {
  readonly path: string;
  /** Hertz. */
  readonly frequency: Float64Array;
  /** Decibels. */
  readonly level: Float64Array;
  /** Standard uncertainty in dB; NaN where none is given: the level then counts as exact. */
  readonly uncertainty: Float64Array;
}

/** What the user decides about the model. */
export interface ModelOptions {
  readonly model: 'reciprocal' | 'directional' | 'auto';
  readonly datum: 'strict' | 'balanced';
  /** Units for which emit = receive + parameter, within the directional model. */
  readonly reversible: readonly string[];
  /** Groups of units that share one response. */
  readonly lookalikes: readonly (readonly string[])[];
  readonly references: readonly Reference[];
  /** `free`: each of several paths is an unknown; `none`: path labels are ignored; or levels of paths. */
  readonly path: 'free' | 'none' | readonly PathLevel[];
  /** Whether the gain of each session is unknown. */
  readonly looseGain: boolean;
}

export const DEFAULT_MODEL_OPTIONS: ModelOptions = {
  model: 'auto',
  datum: 'strict',
  reversible: [],
  lookalikes: [],
  references: [],
  path: 'free',
  looseGain: false,
};

import type { PathLevel, Reference } from '../readings/references.ts';

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

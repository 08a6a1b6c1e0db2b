/** Whether a link has a value, a value that rests on a convention, or none. */
export type LinkStatus = 'ok' | 'datum' | 'open';

/** A change of the links that no reading can see, and the restraint that fixes it. */
export interface FreeDirection {
  /** Entry a link of each frequency: by how much it moves. */
  readonly movement: Float64Array;
  /** The linear restraint Σ c · link = 0 that takes the freedom away. */
  readonly restraint: Float64Array;
  /** `open`: no convention stands for it, so that the links it moves are reported without a level. */
  readonly status: 'datum' | 'open';
  /** What the restraint says, in words, e.g. `mean(emit − receive) = 0 over N01, N02`. */
  readonly convention: string;
}

/** A connected part of the bench: responses that are tied to each other through takes. */
export interface Part {
  /** Indices into `Model.links`, ascending. */
  readonly links: readonly number[];
  /** The two sides, where the part has no odd loop and nothing known; absent where it is solvable. */
  readonly sides: readonly [readonly number[], readonly number[]] | undefined;
  /** Links along a shortest odd loop (a single one for a twin reading); absent where there is none. */
  readonly oddLoop: readonly number[] | undefined;
  /** Links of the part that have a known value. */
  readonly known: readonly number[];
}

/** What can be told apart with one set of readings. */
export interface Separability {
  readonly parts: readonly Part[];
  readonly directions: readonly FreeDirection[];
  /** Entry a link of each frequency. */
  readonly status: readonly LinkStatus[];
  /** Number of links of each frequency less the free directions. */
  readonly rank: number;
}

/** Frequencies at which the same takes have a reading and the same links a known value. */
export interface Pattern {
  /** Indices into the frequencies, ascending. */
  readonly frequencies: readonly number[];
  /** Indices of the takes that have a reading, ascending. */
  readonly takes: readonly number[];
  readonly separability: Separability;
}

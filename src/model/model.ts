/**
 * What explains a take. A link is one additive term of a take's level, and one mechanism serves all of them: an unknown
 * that is free, or has a known value with an uncertainty, or is drawn at random around 0.
 */
export interface Link {
  /** As a reader sees it: `N01`, `N01@clamped`, `N01 emit`, `path block`, `gain morning`. Unique in a model. */
  readonly name: string;
  readonly kind: 'response' | 'path' | 'gain' | 'seating' | 'partner';
  /** A gain is one constant shared by all frequencies; every other link is an unknown of its own at each frequency. */
  readonly scope: 'each frequency' | 'all frequencies';
  /** Absent for a free link. */
  readonly prior: Prior | undefined;
}

/** What is known of a link before the takes: `known` from a certificate or table, `random` around 0. */
export interface Prior {
  readonly kind: 'known' | 'random';
  /** Decibels, a value a frequency (a single one for a link of all frequencies). NaN where nothing is known: there the link is free. */
  readonly value: Float64Array;
  /** Standard uncertainty in dB, above 0, where `value` is a number. */
  readonly uncertainty: Float64Array;
}

/** The links of one take: level = Σ factor · link + known + noise. Factors are 1, or 2 for a unit against itself or its look-alike. */
export interface Chain {
  /** Indices into `Model.links`. */
  readonly links: readonly number[];
  readonly factors: readonly number[];
  /** Exactly known part in dB, a value a frequency (NaN: not known there, so that the reading cannot be used); absent for 0. */
  readonly known: Float64Array | undefined;
}

export type Role = 'emit' | 'receive' | 'both';

/** A response to report: the value of a link, plus an exactly known offset (the reciprocity parameter of a reversible unit). */
export interface Response {
  readonly unit: string;
  /** Empty where no mounts are told apart. */
  readonly mount: string;
  readonly role: Role;
  /** Index into `Model.links`; look-alikes share one. */
  readonly link: number;
  /** Decibels, a value a frequency; absent for 0. */
  readonly offset: Float64Array | undefined;
}

/** Which model was used, and why it was chosen. */
export interface ModelChoice {
  readonly kind: 'reciprocal' | 'directional';
  /** One sentence. */
  readonly reason: string;
}

export interface Model {
  readonly choice: ModelChoice;
  /** Links of each frequency first, then those of all frequencies. */
  readonly links: readonly Link[];
  /** How many links belong to each frequency; the rest are shared. */
  readonly linksPerFrequency: number;
  /** A chain a take, in the order of the takes. */
  readonly chains: readonly Chain[];
  /** In the order units are first named, emit before receive. */
  readonly responses: readonly Response[];
  /** What a part that the pairs leave one constant open is to be fixed by. */
  readonly datum: 'strict' | 'balanced';
}

import type { ResponseBudget } from '../estimate/budget.ts';
import type { MonteCarlo } from '../estimate/monte-carlo.ts';
import type { Solution } from '../estimate/solution.ts';
import type { Examination, OpenFinding } from '../findings/examination.ts';
import type { Patterns } from '../model/find-patterns.ts';
import type { Model } from '../model/model.ts';
import type { InputFile, UnusedRow } from '../readings/readings.ts';
import type { TakeSet } from '../takes/take-set.ts';

/** What reading the files gave, without the readings themselves. */
export interface InputSummary {
  readonly files: readonly InputFile[];
  /** Readings that could be used. */
  readonly readings: number;
  /** Rows that could not, from reading and from gathering. */
  readonly unused: readonly UnusedRow[];
  /** One sentence each. */
  readonly notices: readonly string[];
}

/** Everything that the outputs of `solve` are made of. */
export interface Result {
  readonly version: string;
  /** Every option that shaped the result, by its long name, as `--settings` reads it back. */
  readonly settings: Readonly<Record<string, unknown>>;
  /** Coverage probability of expanded uncertainties. */
  readonly coverage: number;
  /** Chance that a set in which nothing is wrong gets any take flagged. */
  readonly risk: number;
  /** Effect of a partner in dB that does not matter. */
  readonly tolerance: number;
  readonly input: InputSummary;
  readonly set: TakeSet;
  readonly model: Model;
  readonly solution: Solution;
  /** Where the uncertainty of each response comes from; absent where nobody asked. */
  readonly budget?: readonly ResponseBudget[];
  /** What a Monte Carlo check found; absent where none was asked for. */
  readonly monteCarlo?: MonteCarlo | undefined;
  readonly examination: Examination;
}

/** What `inspect` shows: structure only, nothing solved. */
export interface Inspection {
  readonly version: string;
  readonly input: InputSummary;
  readonly set: TakeSet;
  readonly model: Model;
  readonly patterns: Patterns;
  readonly open: readonly OpenFinding[];
}

/** A file to write: its text comes in chunks, so that a large table never stands in memory as a whole. */
export interface OutputFile {
  readonly name: string;
  readonly chunks: () => Iterable<string>;
}

/** How text is set off on a terminal; each function returns the text unchanged where there is no colour. */
export interface TextStyle {
  readonly strong: (text: string) => string;
  readonly faint: (text: string) => string;
  readonly good: (text: string) => string;
  readonly warning: (text: string) => string;
  readonly bad: (text: string) => string;
}

export const PLAIN_STYLE: TextStyle = {
  strong: (text) => text,
  faint: (text) => text,
  good: (text) => text,
  warning: (text) => text,
  bad: (text) => text,
};

import type { BenchTimes } from '../whatif/costs.ts';
import type { Criterion } from '../whatif/criterion.ts';
import type { OrderedSeatings } from '../whatif/order.ts';
import type { Prediction } from '../whatif/predict.ts';
import type { Rehearsal } from '../whatif/rehearse.ts';
import type { SheetTake } from '../whatif/run-sheet.ts';
import type { Suggestion } from '../whatif/suggest.ts';

/** Takes that were suggested, with what shaped them. */
export interface SuggestedTakes {
  readonly suggestion: Suggestion;
  readonly criterion: Criterion;
  /** Minutes that were to be kept; absent where a number of takes was asked for. */
  readonly budget: number | undefined;
  /** Whether nothing but the quickest set fits, so that no choice was left. */
  readonly isCheapest: boolean;
}

/** A run sheet to be written: a file of takes, and a page to carry. */
export interface SheetPlan {
  readonly csv: string;
  readonly page: string;
  readonly takes: readonly SheetTake[];
  /** Hertz; empty where each take names a file of its own. */
  readonly frequencies: readonly number[];
  /** Absent where `solve` may choose by what it sees. */
  readonly model: 'reciprocal' | 'directional' | undefined;
}

/** Everything that the outputs of `whatif` are made of. */
export interface WhatifResult {
  readonly version: string;
  readonly settings: Readonly<Record<string, unknown>>;
  /** A design each, the suggested one last. */
  readonly predictions: readonly Prediction[];
  readonly suggested: SuggestedTakes | undefined;
  readonly ordered: OrderedSeatings | undefined;
  readonly sheet: SheetPlan | undefined;
  readonly rehearsal: Rehearsal | undefined;
  readonly times: BenchTimes;
  /** Whether nobody gave the minutes, so that they are assumptions. */
  readonly timesAreAssumed: boolean;
  /** Partner effect in dB that was asked for. */
  readonly effect: number | undefined;
  readonly coverage: number;
  /** One sentence each. */
  readonly notices: readonly string[];
}

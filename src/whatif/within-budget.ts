import type { ModelOptions } from '../model/model-options.ts';
import type { AssumedBand } from './assumed-scatter.ts';
import { type BenchTimes, costOf } from './costs.ts';
import type { Criterion } from './criterion.ts';
import type { Design } from './design.ts';
import { type OrderedSeatings, orderSeatings } from './order.ts';
import { type Suggestion, suggestTakes } from './suggest.ts';

export interface BudgetOptions {
  /** Minutes that may be spent, mounting included. */
  readonly minutes: number;
  readonly times: BenchTimes;
  readonly criterion: Criterion;
  readonly repeats: number;
  readonly again: boolean;
  readonly seed: number;
  /** Takes needed at least to tell the units apart: see `fewestTakes`. */
  readonly fewest: number;
  readonly model?: ModelOptions | undefined;
  readonly onProgress?: ((done: number, total: number) => void) | undefined;
}

/** A set of takes with the order in which it fits its minutes. */
export interface TimedSet {
  readonly suggestion: Suggestion;
  readonly ordered: OrderedSeatings;
  readonly minutes: number;
}

export interface BudgetPlan {
  /** Absent where not even the fewest takes fit. */
  readonly plan: TimedSet | undefined;
  /** The smallest set that tells all apart; absent where there is a plan, or where no set does. */
  readonly nearest: TimedSet | undefined;
}

/** More seatings than this are no afternoon. */
const MOST_SEATINGS = 400;

/**
 * The best set of takes that fits a budget, ordered so that little is mounted between takes. Takes that are made already
 * stay and cost nothing, controls stay; those that were only planned are planned anew.
 */
export function planWithinBudget(design: Design, band: AssumedBand, options: BudgetOptions): BudgetPlan {
  const { minutes, times, repeats, fewest } = options;
  const made = { ...design, seatings: design.seatings.filter(({ kind }) => kind === 'made' || kind === 'control') };
  const timed = (count: number): TimedSet | undefined => {
    const suggestion = suggestTakes(made, band, { ...options, add: count });
    if (suggestion === undefined) return undefined;
    const ordered = orderSeatings(suggestion.design.seatings, options.seed);
    return { suggestion, ordered, minutes: costOf(ordered.seatings, times).minutes };
  };
  // In a good order each seating brings one unit, and the first one two.
  const each = repeats * times.take + times.reseat;
  const most = each > 0 ? Math.floor((minutes - times.reseat) / each + 1e-9) : MOST_SEATINGS;
  for (let count = Math.min(MOST_SEATINGS, most); count >= Math.max(1, fewest); count--) {
    const found = timed(count);
    if (found === undefined) break;
    if (found.minutes <= minutes + 1e-9) return { plan: found, nearest: undefined };
  }
  return { plan: undefined, nearest: timed(Math.max(1, fewest)) };
}

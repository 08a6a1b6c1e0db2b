import type { ModelOptions } from '../model/model-options.ts';
import { asMounted, mountedAnew } from './as-mounted.ts';
import type { AssumedBand } from './assumed-scatter.ts';
import { cheapestSet } from './cheapest-set.ts';
import { type BenchTimes, costOf } from './costs.ts';
import type { Criterion } from './criterion.ts';
import type { Design, PlannedSeating } from './design.ts';
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
  /** Whether both units are mounted anew for every pair, even if one stands there. */
  readonly fresh: boolean;
  /** Seating numbers that units have already. */
  readonly from: ReadonlyMap<string, number>;
  readonly model?: ModelOptions | undefined;
  readonly onProgress?: ((done: number, total: number) => void) | undefined;
}

/** A set of takes with the order in which it fits its minutes. */
export interface TimedSet {
  readonly suggestion: Suggestion;
  /** Absent where every pair is mounted anew, so that no order is better. */
  readonly ordered: OrderedSeatings | undefined;
  /** Those to come, in their order, with seating numbers. */
  readonly seatings: readonly PlannedSeating[];
  readonly minutes: number;
  /** Whether it is the set that takes the least time, whatever it gives: nothing better fits. */
  readonly isCheapest: boolean;
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
  const timed = (count: number, among?: readonly PlannedSeating[]): TimedSet | undefined => {
    const suggestion = suggestTakes(made, band, { ...options, add: count, among });
    if (suggestion === undefined) return undefined;
    const isCheapest = among !== undefined;
    const { seatings: all } = suggestion.design;
    const ordered = options.fresh ? undefined : orderSeatings(all, options.seed);
    const seatings = ordered === undefined ? mountedAnew(all, options.from) : asMounted(ordered.seatings, options.from);
    return { suggestion, ordered, seatings, minutes: costOf(seatings, times).minutes, isCheapest };
  };
  const fits = (found: TimedSet | undefined) => found !== undefined && found.minutes <= minutes + 1e-9;
  // In a good order each seating brings one unit, and the first one two.
  const each = repeats * times.take + (options.fresh ? 2 : 1) * times.reseat;
  const most = each > 0 ? Math.floor((minutes - (options.fresh ? 0 : times.reseat)) / each + 1e-9) : MOST_SEATINGS;
  for (let count = Math.min(MOST_SEATINGS, most); count >= Math.max(1, fewest); count--) {
    const found = timed(count);
    if (found === undefined) break;
    if (fits(found)) return { plan: found, nearest: undefined };
  }
  const cheapest = fewest === 0 ? undefined : cheapestSet(made, fewest, repeats, options.model);
  const least = cheapest === undefined ? timed(Math.max(1, fewest)) : timed(fewest, cheapest);
  return fits(least) ? { plan: least, nearest: undefined } : { plan: undefined, nearest: least };
}

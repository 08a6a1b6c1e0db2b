import { describe, expect, it } from 'vitest';
import { emptyDesign, namedUnits } from '../../src/whatif/patterns.ts';
import { reachOf } from '../../src/whatif/reach.ts';
import { type BudgetOptions, planWithinBudget } from '../../src/whatif/within-budget.ts';
import { ladder } from './designs-made.ts';

const BAND = ladder(0.1, 0.5, 0.3);
const design = emptyDesign(namedUnits(6));
const options = (minutes: number, more: Partial<BudgetOptions> = {}): BudgetOptions => ({
  minutes,
  times: { take: 3, reseat: 5 },
  criterion: 'mean',
  repeats: 1,
  again: false,
  seed: 1,
  fewest: reachOf(design).fewest,
  fresh: false,
  from: new Map(),
  ...more,
});

describe('planWithinBudget', () => {
  it('fills the minutes and never exceeds them', () => {
    for (const minutes of [60, 100, 127, 240]) {
      const { plan } = planWithinBudget(design, BAND, options(minutes));
      expect(plan!.minutes).toBeLessThanOrEqual(minutes);
      // One more pair in the same order would not have fitted.
      expect(plan!.minutes).toBeGreaterThan(minutes - 3 - 2 * 5);
      expect(plan!.suggestion.steps.at(-1)!.merit.open).toBe(0);
    }
  });

  it('falls back on the quickest set that tells all apart, and names it where even that is too long', () => {
    // Six pairs, each bringing one unit after the first: 6 takes of 3 min and 7 mountings of 5 min.
    const quickest = 6 * 3 + 7 * 5;
    expect(planWithinBudget(design, BAND, options(quickest)).plan).toMatchObject({
      minutes: quickest,
      isCheapest: true,
    });
    const { plan, nearest } = planWithinBudget(design, BAND, options(quickest - 1));
    expect(plan).toBeUndefined();
    expect(nearest!.minutes).toBe(quickest);
    expect(nearest!.suggestion.steps.at(-1)!.merit.open).toBe(0);
  });

  it('reckons with two mountings a pair where all is mounted anew', () => {
    const { plan } = planWithinBudget(design, BAND, options(130, { fresh: true }));
    expect(plan!.suggestion.steps).toHaveLength(10);
    expect(plan!.minutes).toBe(130);
  });
});

import type { Solution } from '../estimate/solution.ts';
import type { Model } from '../model/model.ts';
import { holmAdjusted } from '../numeric/multiple-testing.ts';
import type { TakeSet } from '../takes/take-set.ts';
import { estimateAgain, refit, type ScreeningLevels, startingLevels } from './screening-levels.ts';
import type { SpreadOfSquares } from './spread-of-squares.ts';
import { constantShifts, type TakeTests, type TestKind, testSome, testTakes } from './take-tests.ts';
import { EQUALLY_GOOD_RATIO, LARGEST_FLAGGED_PART } from './thresholds.ts';

/** The tests of one take. */
export interface TakeScreening {
  /** Chance of so large a deviation, corrected for the tests and for the number of takes (Holm 1979); NaN where nothing checks it. */
  readonly pValue: number;
  readonly verdict: 'agrees' | 'flagged' | 'tied' | 'uncheckable' | 'not tested';
  /** The test with the smallest chance. */
  readonly test: TestKind;
  /** Constant shift over all frequencies with its standard uncertainty in dB and degrees of freedom; NaN where unchecked. */
  readonly shift: number;
  readonly shiftUncertainty: number;
  readonly shiftDof: number;
  /** Takes that could be at fault in its place; empty unless tied. */
  readonly tiedWith: readonly number[];
}

/** All takes screened, with what the explanations of flagged takes need. */
export interface Screening {
  readonly takes: readonly TakeScreening[];
  /** Takes set aside, worst first. */
  readonly setAside: readonly number[];
  /** More takes disagree than can be set aside: it is the model that fails. */
  readonly isModelFailing: boolean;
  readonly levels: ScreeningLevels;
}

export interface ScreenOptions {
  /** Chance that a clean set gets any take flagged. */
  readonly risk: number;
}

const MOST_ROUNDS = 3;

/**
 * Tests every take against all others: for a constant shift, a slope, a shift in a third-octave, and for any deviation.
 * Repeat, seating and partner scatter are estimated robustly, so that one bad take cannot hide another; the worst take is
 * set aside and the links are fitted again, until none stands out; then each take set aside is offered again.
 * A unit that disagrees in all its pairs has a large partner share, and its takes are not flagged for it.
 */
export function screenTakes(set: TakeSet, model: Model, solution: Solution, { risk }: ScreenOptions): Screening {
  const count = set.takes.length;
  const limit = risk / Math.max(1, count);
  // One can always be set aside: a tie of few takes is a tie, not the failure of the model.
  const most = Math.max(1, Math.floor(LARGEST_FLAGGED_PART * count));
  let levels = startingLevels(set, model, solution);
  let active = new Array<boolean>(count).fill(true);
  const setAside: number[] = [];
  const ties = new Map<number, readonly number[]>();
  let isModelFailing = false;
  let lastSpread: SpreadOfSquares = { dof: 1, excess: 1 };
  for (let round = 0; round < MOST_ROUNDS; round++) {
    let changed = false;
    for (;;) {
      const { tests, spread } = testTakes(levels, count);
      lastSpread = spread;
      const worst = worstTake(tests, limit);
      if (worst === undefined) break;
      if (setAside.length >= most) {
        isModelFailing = true;
        break;
      }
      active = active.map((is, t) => is && t !== worst);
      const rivals = rivalsOf(tests, worst, limit);
      levels = refit(levels, active);
      if (rivals.length > 0) {
        const after = testSome(levels, count, rivals, spread);
        const tied = rivals.filter((t) => !(after[t]!.p <= limit));
        if (tied.length > 0) ties.set(worst, tied);
      }
      setAside.push(worst);
      changed = true;
    }
    // Offered again, latest first: what stood out only because of a worse take comes back.
    for (const t of [...setAside].reverse()) {
      const offered = active.map((is, other) => is || other === t);
      const again = testSome(refit(levels, offered), count, [t], lastSpread)[t]!;
      if (again.p <= limit || isModelFailing) continue;
      active = offered;
      setAside.splice(setAside.indexOf(t), 1);
      ties.delete(t);
      levels = refit(levels, active);
      changed = true;
    }
    if (!changed || isModelFailing) break;
    levels = estimateAgain(levels, active);
  }
  return verdicts(levels, active, setAside, ties, count, { risk, isModelFailing });
}

function worstTake(tests: readonly TakeTests[], limit: number): number | undefined {
  let worst: number | undefined;
  tests.forEach((test, t) => {
    if (!(test.p <= limit)) return;
    const best = worst === undefined ? undefined : tests[worst]!;
    if (best === undefined || test.p < best.p || (test.p === best.p && test.misfit > best.misfit)) worst = t;
  });
  return worst;
}

/** Takes that stand out nearly as much as the worst by the same test: each of them may be the one at fault. */
function rivalsOf(tests: readonly TakeTests[], worst: number, limit: number): number[] {
  const within = 2 * Math.log(EQUALLY_GOOD_RATIO);
  const { misfit, test } = tests[worst]!;
  return tests
    .map((_, t) => t)
    .filter(
      (t) => t !== worst && tests[t]!.p <= limit && tests[t]!.test === test && tests[t]!.misfit > misfit - within,
    );
}

function verdicts(
  levels: ScreeningLevels,
  active: readonly boolean[],
  setAside: readonly number[],
  ties: ReadonlyMap<number, readonly number[]>,
  count: number,
  { risk, isModelFailing }: { risk: number; isModelFailing: boolean },
): Screening {
  const { tests: standing, spread } = testTakes(levels, count);
  const shifts = constantShifts(levels, count);
  const tiedWith = new Map<number, number[]>();
  for (const worst of setAside) {
    // A take set aside is judged against those that stand; a tied one and its rivals, all of them being there.
    const together = [worst, ...(ties.get(worst) ?? [])];
    const offered = refit(
      levels,
      active.map((is, other) => is || other === worst),
    );
    const tests = testSome(offered, count, together, spread);
    const constants = constantShifts(offered, count, together);
    for (const t of together) {
      standing[t] = tests[t]!;
      shifts[t] = constants[t]!;
      const others = together.filter((other) => other !== t);
      if (others.length > 0) tiedWith.set(t, [...(tiedWith.get(t) ?? []), ...others]);
    }
  }
  const adjusted = holmAdjusted(standing.map(({ p }) => p));
  const flagged = new Set(setAside);
  const isKnown = levels.templates.some(({ scatter }) => scatter.isKnown);
  const takes = Array.from({ length: count }, (_, t): TakeScreening => {
    const shift = shifts[t]!;
    const verdict = tiedWith.has(t)
      ? 'tied'
      : flagged.has(t) || adjusted[t]! <= risk
        ? 'flagged'
        : !Number.isNaN(adjusted[t]!)
          ? 'agrees'
          : isKnown
            ? 'uncheckable'
            : 'not tested';
    return {
      pValue: adjusted[t]!,
      verdict,
      test: standing[t]!.test,
      shift: shift.shift,
      shiftUncertainty: shift.uncertainty,
      shiftDof: shift.dof,
      tiedWith: tiedWith.get(t) ?? [],
    };
  });
  return { takes, setAside, isModelFailing, levels };
}

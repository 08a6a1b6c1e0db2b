import { type ChainLayout, chainLayout } from '../estimate/chain-groups.ts';
import { type LevelScatter, refitLevel, scatterOfLevel } from '../estimate/scatter-of-level.ts';
import { shiftsOfTakes } from '../estimate/shifts-of-takes.ts';
import type { Solution } from '../estimate/solution.ts';
import type { Model } from '../model/model.ts';
import { neighbourCorrelation, shareForVariance } from '../numeric/effective-share.ts';
import { fUpper } from '../numeric/f-distribution.ts';
import { holmAdjusted } from '../numeric/multiple-testing.ts';
import { normalUpperQuantile } from '../numeric/normal.ts';
import { studentTwoSided } from '../numeric/student-t.ts';
import type { TakeSet } from '../takes/take-set.ts';
import type { ConstantShift } from './explain-take.ts';
import { spreadOfSquares } from './spread-of-squares.ts';
import { bandColumns, takeTemplates } from './take-templates.ts';
import { EQUALLY_GOOD_RATIO, LARGEST_FLAGGED_PART } from './thresholds.ts';

/** What a take was caught by. */
export type TestKind = 'constant' | 'slope' | 'band' | 'any';

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

/** The levels at which takes are compared, with the takes that stand. */
export interface ScreeningLevels {
  readonly layout: ChainLayout;
  readonly links: number;
  /** A template each: constant, slope, bands. */
  readonly templates: readonly {
    readonly kind: 'constant' | 'slope' | 'band';
    readonly from: number;
    readonly to: number;
    readonly scatter: LevelScatter;
  }[];
  /** A third-octave each. */
  readonly bands: readonly {
    readonly from: number;
    readonly to: number;
    readonly frequencies: readonly number[];
    readonly scatter: LevelScatter;
  }[];
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
  const most = Math.floor(LARGEST_FLAGGED_PART * count);
  let levels = startingLevels(set, model, solution);
  let active = new Array<boolean>(count).fill(true);
  const setAside: number[] = [];
  const ties = new Map<number, readonly number[]>();
  let isModelFailing = false;
  for (let round = 0; round < MOST_ROUNDS; round++) {
    let changed = false;
    for (;;) {
      const tests = testTakes(levels, count);
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
        const after = testTakes(levels, count, rivals);
        const tied = rivals.filter((t) => !(after[t]!.p <= limit));
        if (tied.length > 0) ties.set(worst, tied);
      }
      setAside.push(worst);
      changed = true;
    }
    // Offered again, latest first: what stood out only because of a worse take comes back.
    for (const t of [...setAside].reverse()) {
      const offered = active.map((is, other) => is || other === t);
      const again = testTakes(refit(levels, offered), count, [t])[t]!;
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

function startingLevels(set: TakeSet, model: Model, solution: Solution): ScreeningLevels {
  const layout = chainLayout(set, model);
  const links = model.linksPerFrequency;
  return {
    layout,
    links,
    templates: takeTemplates(set, solution).map(({ kind, from, to, deviations }) => ({
      kind,
      from,
      to,
      scatter: scatterOfLevel(layout, links, deviations),
    })),
    bands: bandColumns(set, solution).map(({ from, to, frequencies, deviations }) => ({
      from,
      to,
      frequencies,
      scatter: scatterOfLevel(layout, links, deviations),
    })),
  };
}

function refit(levels: ScreeningLevels, active: readonly boolean[]): ScreeningLevels {
  const one = <L extends { readonly scatter: LevelScatter }>(level: L): L => {
    const present = hasReading(level.scatter);
    const both = active.map((is, t) => is && present(t));
    return { ...level, scatter: refitLevel(levels.layout, levels.links, level.scatter, both) };
  };
  return { ...levels, templates: levels.templates.map(one), bands: levels.bands.map(one) };
}

function estimateAgain(levels: ScreeningLevels, active: readonly boolean[]): ScreeningLevels {
  const one = <L extends { readonly scatter: LevelScatter }>(level: L): L => {
    const present = hasReading(level.scatter);
    const deviations = { ...level.scatter.deviations, active: active.map((is, t) => is && present(t)) };
    return { ...level, scatter: scatterOfLevel(levels.layout, levels.links, deviations) };
  };
  return { ...levels, templates: levels.templates.map(one), bands: levels.bands.map(one) };
}

// A take without readings here has NaN in its row, or never was active.
function hasReading({ deviations }: LevelScatter): (take: number) => boolean {
  const { present } = deviations;
  return (take) => present[take]!;
}

interface TakeTests {
  /** Bonferroni over the tests of the take; NaN where nothing checks it. */
  readonly p: number;
  readonly test: TestKind;
  /** Σ of squared standardised deviations that the deciding test rests on: compared between rival takes. */
  readonly misfit: number;
}

type Note = (take: number, p: number, test: TestKind, misfit: number) => void;

/** Tests of all takes, or of some. */
function testTakes(levels: ScreeningLevels, count: number, only?: readonly number[]): TakeTests[] {
  const nothing: TakeTests = { p: Number.NaN, test: 'constant', misfit: 0 };
  const tests = new Array<TakeTests>(count).fill(nothing);
  const number = levels.templates.length + 1;
  // Below this many standard uncertainties even the normal distribution gives a chance that the correction makes 1.
  const surelyTame = normalUpperQuantile(0.5 / number);
  const note: Note = (t, p, test, misfit) => {
    const entry = tests[t]!;
    const corrected = Math.min(1, p * number);
    if (Number.isNaN(entry.p) || corrected < entry.p || (corrected === entry.p && misfit > entry.misfit)) {
      tests[t] = { p: corrected, test, misfit };
    }
  };
  for (const { kind, scatter } of levels.templates) {
    if (!scatter.isKnown) continue;
    const { shift, uncertainty, dof } = shiftsOfTakes(levels.layout, scatter, only);
    for (let t = 0; t < count; t++) {
      const w = Math.abs(shift[t]! / uncertainty[t]!);
      if (!Number.isNaN(w)) note(t, w < surelyTame ? 1 : studentTwoSided(w, dof[t]!), kind, w * w);
    }
  }
  anyDeviation(levels, count, only, note);
  return tests;
}

/** Mean square over all frequencies, with as many of them counted independent as the correlation of neighbours leaves. */
function anyDeviation(levels: ScreeningLevels, count: number, only: readonly number[] | undefined, note: Note): void {
  const width = levels.bands.reduce((sum, band) => sum + band.frequencies.length, 0);
  const standardised = new Float64Array(count * width).fill(Number.NaN);
  const spent = new Float64Array(count);
  for (const { scatter, frequencies } of levels.bands) {
    if (!scatter.isKnown) continue;
    const columns = frequencies.length;
    const { shift, uncertainty, dof } = shiftsOfTakes(levels.layout, scatter);
    for (let t = 0; t < count; t++) {
      if (Number.isNaN(uncertainty[t]!)) continue;
      for (let c = 0; c < columns; c++) {
        standardised[t * width + frequencies[c]!] = shift[t * columns + c]! / uncertainty[t]!;
      }
      spent[t] = spent[t]! + columns / dof[t]!;
    }
  }
  const share = shareForVariance(neighbourCorrelation(standardised, count, width), width);
  const found = Array.from({ length: count }, (_, t) => {
    let known = 0;
    let squares = 0;
    for (let f = t * width; f < (t + 1) * width; f++) {
      const value = standardised[f]!;
      if (Number.isNaN(value)) continue;
      known++;
      squares += value * value;
    }
    return { known, square: squares / known };
  });
  const spread = spreadOfSquares(
    found.filter(({ known }) => known > 0).map(({ square }) => square),
    Math.max(1, width * share),
  );
  for (const t of only ?? found.keys()) {
    const { known, square } = found[t]!;
    if (known === 0) continue;
    const independent = Math.max(1, spread.dof * (known / width));
    // Each band's scatter was estimated apart; the mean of their degrees of freedom stands for all.
    const dof = spent[t]! > 0 ? known / spent[t]! : Number.POSITIVE_INFINITY;
    const ratio = square / spread.excess;
    note(t, ratio < 1 ? 1 : fUpper(ratio, independent, dof), 'any', ratio * independent);
  }
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
  const standing = testTakes(levels, count);
  const shifts = constantShifts(levels, count);
  const tiedWith = new Map<number, number[]>();
  for (const worst of setAside) {
    // A take set aside is judged against those that stand; a tied one and its rivals, all of them being there.
    const together = [worst, ...(ties.get(worst) ?? [])];
    const offered = refit(
      levels,
      active.map((is, other) => is || other === worst),
    );
    const tests = testTakes(offered, count, together);
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

function constantShifts(levels: ScreeningLevels, count: number, only?: readonly number[]): ConstantShift[] {
  const constant = levels.templates.find(({ kind }) => kind === 'constant');
  const nothing = { shift: Number.NaN, uncertainty: Number.NaN, dof: Number.NaN };
  if (constant === undefined || !constant.scatter.isKnown) return new Array<ConstantShift>(count).fill(nothing);
  const { shift, uncertainty, dof } = shiftsOfTakes(levels.layout, constant.scatter, only);
  return Array.from({ length: count }, (_, t) => ({ shift: shift[t]!, uncertainty: uncertainty[t]!, dof: dof[t]! }));
}

import { readingScatter } from '../estimate/reading-scatter.ts';
import { type LevelScatter, refitLevel } from '../estimate/scatter-of-level.ts';
import { shiftsOfTakes } from '../estimate/shifts-of-takes.ts';
import { isGiven, type Solution } from '../estimate/solution.ts';
import { type SolveOptions, solve } from '../estimate/solve.ts';
import type { Model } from '../model/model.ts';
import { neighbourCorrelation } from '../numeric/effective-share.ts';
import type { TakeSet } from '../takes/take-set.ts';
import { explainTake } from './explain-take.ts';
import type { ExplainedTake } from './explanations.ts';
import { type Screening, screenTakes } from './screen-takes.ts';
import type { ScreeningLevels } from './screening-levels.ts';

/** A solution that rests on the takes that agree, and what was found of the others. */
export interface Settled {
  /** All takes, weighed by what the readings say of themselves. */
  readonly first: Solution;
  /** The takes that agree, weighed by the scatter that was found. */
  readonly solution: Solution;
  readonly screening: Screening;
  /** Takes kept out of the solution. */
  readonly leftOut: ReadonlySet<number>;
  /** Flagged and tied takes with what they read like, worst first. */
  readonly explained: readonly ExplainedTake[];
}

export interface SettleOptions extends SolveOptions {
  /** Chance that a clean set gets any take flagged. */
  readonly risk: number;
}

/**
 * Solves, screens the takes, and solves again without those that are flagged and with the scatter that was found; then
 * says what each of them reads like.
 * Tied takes stay in: the data do not tell which of them to leave out. Where the model fails as a whole, nothing is left
 * out.
 */
export async function settle(set: TakeSet, model: Model, options: SettleOptions): Promise<Settled> {
  const first = await solve(set, model, options);
  const screening = await screenTwice(set, model, first, options);
  const leftOut = flaggedOf(screening);
  const solution = await solveAgain(set, model, options, first, screening.levels, leftOut);
  const suspects = screening.takes
    .map(({ verdict }, t) => ({ verdict, t }))
    .filter(({ verdict }) => verdict === 'flagged' || verdict === 'tied')
    .map(({ t }) => t)
    .sort((a, b) => screening.takes[a]!.pValue - screening.takes[b]!.pValue || a - b);
  const { levels, setAside } = screening;
  const correlation = suspects.length === 0 ? 0 : correlationAlong(levels, set);
  const explained = suspects.map((t) => {
    const rivals = new Set(screening.takes[t]!.tiedWith);
    const out = new Set(setAside.filter((other) => other !== t && !rivals.has(other)));
    return explainTake(set, model, solution, t, { ...deviationOf(levels, set, t, out), correlation });
  });
  return { first, solution, screening, leftOut, explained };
}

/**
 * Screens the takes; where any is flagged and the user gave the uncertainty of readings, once more by the residuals of a
 * solution without it: a bad take makes all residuals alike along frequency, and what is alike counts for little.
 */
async function screenTwice(set: TakeSet, model: Model, first: Solution, options: SettleOptions): Promise<Screening> {
  const screening = screenTakes(set, model, first, options);
  const without = flaggedOf(screening);
  if (without.size === 0 || !isGiven(first.readingUncertainty.source)) return screening;
  return screenTakes(set, model, await solve(set, model, { ...options, without }), options);
}

function flaggedOf({ isModelFailing, setAside, takes }: Screening): Set<number> {
  return new Set(isModelFailing ? [] : setAside.filter((t) => takes[t]!.verdict === 'flagged'));
}

/** The final solution: without the takes left out, and weighed by the scatter that was found where it can be told apart. */
async function solveAgain(
  set: TakeSet,
  model: Model,
  options: SettleOptions,
  first: Solution,
  { layout, bands }: ScreeningLevels,
  leftOut: ReadonlySet<number>,
): Promise<Solution> {
  const width = set.frequencies.length;
  const levels = set.levels.map((level, cell) => (leftOut.has(Math.floor(cell / width)) ? Number.NaN : level));
  const scatter = readingScatter({ ...set, levels }, model, layout, bands, first.readingUncertainty);
  if (scatter === undefined && leftOut.size === 0) return first;
  return solve(set, model, { ...options, without: leftOut, scatter });
}

/** The take's deviation from all takes but those in `out`. */
function deviationOf(levels: ScreeningLevels, set: TakeSet, take: number, out: ReadonlySet<number>) {
  const shift = new Float64Array(set.frequencies.length).fill(Number.NaN);
  const uncertainty = new Float64Array(shift.length).fill(Number.NaN);
  const { layout, links } = levels;
  const shiftIn = (scatter: LevelScatter) => {
    const offered = scatter.deviations.present.map((is, t) => is && !out.has(t));
    return shiftsOfTakes(layout, refitLevel(layout, links, scatter, offered), [take]);
  };
  for (const { scatter, frequencies } of levels.bands) {
    const own = shiftIn(scatter);
    frequencies.forEach((f, c) => {
      shift[f] = own.shift[take * frequencies.length + c]!;
      uncertainty[f] = own.uncertainty[take]!;
    });
  }
  const level = levels.templates.find(({ kind }) => kind === 'constant');
  const found = level && shiftIn(level.scatter);
  const constant = found && {
    shift: found.shift[take]!,
    uncertainty: found.uncertainty[take]!,
    dof: found.dofOf(take),
  };
  return { shift, uncertainty, constant };
}

/** Correlation of neighbours along frequency of what standing takes show, each in units of its own uncertainty. */
function correlationAlong({ bands, layout }: ScreeningLevels, set: TakeSet): number {
  const width = set.frequencies.length;
  const standardised = new Float64Array(set.takes.length * width).fill(Number.NaN);
  for (const { scatter, frequencies } of bands) {
    const { shift, uncertainty } = shiftsOfTakes(layout, scatter);
    for (let t = 0; t < set.takes.length; t++) {
      frequencies.forEach((f, c) => {
        standardised[t * width + f] = shift[t * frequencies.length + c]! / uncertainty[t]!;
      });
    }
  }
  return neighbourCorrelation(standardised, set.takes.length, width);
}

import { findPatterns, type Patterns } from '../model/find-patterns.ts';
import type { Model } from '../model/model.ts';
import type { SystematicEffect } from '../model/systematic-effects.ts';
import type { TakeSet } from '../takes/take-set.ts';
import { withDofOfParts } from './dof-of-parts.ts';
import type { RankRevealingInverse } from './factor-block.ts';
import { withLeftOutTakes } from './left-out-takes.ts';
import type { ReadingScatter } from './reading-scatter.ts';
import { readingUncertainty } from './reading-uncertainty.ts';
import { residualScatter } from './residual-scatter.ts';
import { paddedUses, withMoreLinks, withoutSeatingLinks, withSeatingLinks } from './shared-seatings.ts';
import type { ReadingUncertainty, Solution } from './solution.ts';
import { solutionOf } from './solution-of.ts';
import { type Sweep, sweep } from './sweep.ts';

export interface SolveOptions {
  /** Standard uncertainty of a reading in dB, used where the input has none of its own. */
  readonly givenUncertainty?: number | undefined;
  /** Indices of takes to keep out of the solution; their residuals against it are given all the same. */
  readonly without?: ReadonlySet<number> | undefined;
  /** Scatter of repeats, seatings and partners, where it is known; it then takes the place of the readings' own. */
  readonly scatter?: ReadingScatter | undefined;
  /** Systematic effects that the takes do not show; they come to the uncertainty, and leave the estimates alone. */
  readonly effects?: readonly SystematicEffect[] | undefined;
  /** Called with the frequencies done and in all; several passes may be made. */
  readonly onProgress?: (done: number, total: number) => void;
}

/** Passes in which the scatter of readings and the weights it gives settle; they move only where links have priors or gains are shared. */
const MOST_PASSES = 12;
/** Relative change of the scatter that counts as settled; well below what its own degrees of freedom leave open. */
const SETTLED = 1e-9;

/**
 * Solves all frequencies by weighted least squares.
 * Readings that come with no uncertainty are weighted equally at first; then the residuals tell their scatter, and the
 * solution is made again with it until it no longer moves.
 * Cost: proportional to the readings, plus links³ a block of frequencies with weights of its own.
 */
export async function solve(set: TakeSet, model: Model, options: SolveOptions = {}): Promise<Solution> {
  const { without } = options;
  if (without === undefined || without.size === 0) return solveAll(set, model, options);
  const width = set.frequencies.length;
  const levels = set.levels.map((level, cell) => (without.has(Math.floor(cell / width)) ? Number.NaN : level));
  const solution = await solveAll({ ...set, levels }, model, options);
  return withLeftOutTakes(set, model, solution, without);
}

async function solveAll(set: TakeSet, model: Model, options: SolveOptions): Promise<Solution> {
  const { effects } = options;
  const patterns = findPatterns(set, model);
  const known = readingUncertainty(set, options.givenUncertainty);
  const pass = passWith(set, model, patterns, options.onProgress);
  if (options.scatter !== undefined) return solveScattered(set, model, patterns, options.scatter, options);
  if (known !== undefined) return solutionOf(set, model, patterns, await pass(known.values), known, { effects });

  let swept = await pass(new Float64Array(set.levels.length).fill(Number.NaN));
  let learnt = residualScatter(set, swept);
  for (let i = 0; i < MOST_PASSES && learnt.source === 'residuals'; i++) {
    swept = await pass(learnt.values);
    const next = residualScatter(set, swept);
    const settled = change(learnt, next) < SETTLED;
    learnt = next;
    if (settled) break;
  }
  return solutionOf(set, model, patterns, swept, learnt, { effects });
}

/** Solves with readings that share seatings and partners; seatings that serve several pairs are links of their own for it. */
async function solveScattered(
  set: TakeSet,
  model: Model,
  patterns: Patterns,
  scatter: ReadingScatter,
  { effects, onProgress }: SolveOptions,
): Promise<Solution> {
  const { total, independent, uses, shared, sharedDeviation } = scatter;
  const statement = scatterStatement(set, total, independent);
  const count = shared.seatings.length;
  if (count === 0) {
    const swept = await passWith(set, model, patterns, onProgress)(independent);
    return { ...solutionOf(set, model, patterns, swept, statement, { uses, effects }), scatter };
  }
  const wider = withSeatingLinks(model, shared, sharedDeviation);
  const morePatterns = withMoreLinks(patterns, count);
  const swept = await passWith(set, wider, morePatterns, onProgress)(independent);
  const n = model.linksPerFrequency;
  const wide = solutionOf(set, wider, morePatterns, swept, statement, { uses: paddedUses(uses, n, count), effects });
  const solution = { ...withoutSeatingLinks(wide, n, shared), patterns: patterns.patterns, scatter };
  return withDofOfParts(set, model, solution);
}

function scatterStatement(set: TakeSet, total: Float64Array, independent: Float64Array): ReadingUncertainty {
  return {
    source: 'scatter',
    statement:
      'The uncertainty rests on the scatter of repeats, seatings and partners, each found per third-octave band; takes that share a seating or a pair count as correlated.',
    values: total,
    independent,
    dof: new Float64Array(set.frequencies.length).fill(Number.POSITIVE_INFINITY),
    bands: [],
  };
}

export function passWith(
  set: TakeSet,
  model: Model,
  patterns: Patterns,
  onProgress: SolveOptions['onProgress'],
): (uncertainty: Float64Array) => Promise<Sweep> {
  let fallback: RankRevealingInverse | undefined;
  return async (uncertainty) => {
    const swept = sweep(set, model, patterns, uncertainty, fallback, onProgress);
    if (!swept.needsFallback) return swept;
    // Loaded only when it is needed: the library behind it takes longer to load than most sets to solve.
    fallback = (await import('../numeric/rank-revealing.ts')).inverseNormalMatrix;
    return sweep(set, model, patterns, uncertainty, fallback, onProgress);
  };
}

function change(before: ReadingUncertainty, after: ReadingUncertainty): number {
  const changes = before.bands.map((band, b) =>
    Math.abs((after.bands[b]?.standardDeviation ?? 0) / band.standardDeviation - 1),
  );
  return Math.max(0, ...changes.filter((value) => !Number.isNaN(value)));
}

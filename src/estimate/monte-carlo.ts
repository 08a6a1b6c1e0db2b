import { findPatterns } from '../model/find-patterns.ts';
import type { Model } from '../model/model.ts';
import type { SystematicEffect } from '../model/systematic-effects.ts';
import { normalUpperQuantile } from '../numeric/normal.ts';
import { numericalTolerance } from '../numeric/numerical-tolerance.ts';
import { randomStream } from '../numeric/random.ts';
import type { LevelDraws } from '../takes/drawn-levels.ts';
import type { TakeSet } from '../takes/take-set.ts';
import { type CountedDraws, countedDraws } from './counted-draws.ts';
import { drawErrors } from './draw-errors.ts';
import { withMoreLinks, withSeatingLinks } from './shared-seatings.ts';
import type { Solution } from './solution.ts';
import { passWith } from './solve.ts';
import { solveAgain } from './solve-again.ts';
import { thirdOctaves } from './third-octaves.ts';

export interface MonteCarloOptions {
  readonly draws: number;
  readonly seed: number;
  readonly coverage: number;
  /** Makes levels as they might have been read. */
  readonly levels: LevelDraws;
  readonly effects: readonly SystematicEffect[];
  readonly onProgress?: (done: number, total: number) => void;
}

/** Whether the linear result stands in one third-octave band. */
export interface MonteCarloBand {
  /** Hertz. */
  readonly from: number;
  readonly to: number;
  /**
   * `validated`: both ends of the interval agree to the tolerance for all responses; `not validated`: for some they do not;
   * `undecided`: too few draws to tell.
   */
  readonly verdict: 'validated' | 'not validated' | 'undecided';
  /** Significant digits of u that the tolerance stands for. */
  readonly digits: 1 | 2;
  /** Of the response for which it is worst, in dB: distance of the ends, tolerance, and standard deviation of the distance from the number of draws. */
  readonly distance: number;
  readonly tolerance: number;
  readonly samplingError: number;
  /** Index into `Model.responses`. */
  readonly response: number;
}

export interface MonteCarlo {
  readonly draws: number;
  readonly seed: number;
  readonly bands: readonly MonteCarloBand[];
  /** Share of drawn readings that came too close to the background noise. */
  readonly tooClose: number;
}

/**
 * Propagates distributions through noise subtraction, grid and solution, and holds the coverage intervals of the linear
 * result against those of the draws. What is checked is the propagation: estimated variances count as known on both sides,
 * since scaled t distributions and Welch–Satterthwaite disagree for few degrees of freedom however linear the model is. Ends are averaged over the frequencies of a band before they are compared, so that few draws tell more.
 * The same seed gives the same draws. Cost: draws × readings.
 * Source: JCGM 101:2008, 7 (propagation) and 8 (comparison with the linear result).
 * @param set as it was solved: levels of takes that were left out are NaN.
 */
export async function monteCarlo(
  set: TakeSet,
  model: Model,
  solution: Solution,
  options: MonteCarloOptions,
): Promise<MonteCarlo> {
  const { draws, seed, coverage, levels, effects, onProgress } = options;
  const { scatter, readingUncertainty: reading } = solution;
  const count = scatter?.shared.seatings.length ?? 0;
  const wider =
    scatter !== undefined && count > 0 ? withSeatingLinks(model, scatter.shared, scatter.sharedDeviation) : model;
  const patterns = findPatterns(set, model);
  const swept = await passWith(
    set,
    wider,
    count > 0 ? withMoreLinks(patterns, count) : patterns,
    undefined,
  )(reading.independent ?? reading.values);
  const stream = randomStream(seed);
  const errors = drawErrors(set, wider, solution, effects);
  const factor = normalUpperQuantile((1 - coverage) / 2);
  const counted = countedDraws(set, model, solution, factor);
  const estimates = new Float64Array(set.frequencies.length * wider.linksPerFrequency);
  for (let draw = 0; draw < draws; draw++) {
    errors.next(stream);
    const drawn = levels.draw(stream, errors.deviation);
    errors.addTo(drawn, stream);
    solveAgain(set, wider, swept, drawn, errors.known, estimates);
    counted.add(estimates, wider.linksPerFrequency);
    if (draw % 50 === 49) onProgress?.(draw + 1, draws);
  }
  return {
    draws,
    seed,
    bands: bandsOf(set, model, solution, counted, options, factor),
    tooClose: levels.counts.drawn === 0 ? 0 : levels.counts.tooClose / levels.counts.drawn,
  };
}

/** Distances of the ends of one response in one band, averaged over its frequencies. */
interface Ends {
  readonly uncertainty: number;
  readonly distance: number;
  readonly samplingError: number;
}

function bandsOf(
  set: TakeSet,
  model: Model,
  solution: Solution,
  counted: CountedDraws,
  { draws, coverage }: MonteCarloOptions,
  factor: number,
): MonteCarloBand[] {
  const { bands, bandOf } = thirdOctaves(set.frequencies);
  const tail = (1 - coverage) / 2;
  // Standard deviation of a quantile of N draws in units of u: √(p (1 − p) / N) over the density there, as of a normal one.
  const density = Math.exp(-(factor ** 2) / 2) / Math.sqrt(2 * Math.PI);
  const single = Math.sqrt((tail * (1 - tail)) / draws) / density;
  return bands.flatMap(({ from, to }, band): MonteCarloBand[] => {
    const frequencies = [...set.frequencies.keys()].filter((f) => bandOf[f] === band);
    const found = model.responses.flatMap((_, response): (MonteCarloBand & { excess: number })[] => {
      const ends = endsOf(model, solution, counted, response, frequencies, tail, single, factor);
      if (ends === undefined) return [];
      const { uncertainty, distance, samplingError } = ends;
      const fine = numericalTolerance(uncertainty, 2);
      const digits = samplingError <= fine / 2 ? 2 : 1;
      const tolerance = digits === 2 ? fine : numericalTolerance(uncertainty, 1);
      const verdict =
        distance > tolerance + 3 * samplingError
          ? 'not validated'
          : distance <= tolerance && samplingError <= tolerance / 2
            ? 'validated'
            : 'undecided';
      return [
        { from, to, verdict, digits, distance, tolerance, samplingError, response, excess: distance / tolerance },
      ];
    });
    const worst = ['not validated', 'undecided', 'validated']
      .map((verdict) => found.filter((one) => one.verdict === verdict).sort((a, b) => b.excess - a.excess)[0])
      .find((one) => one !== undefined);
    if (worst === undefined) return [];
    const { excess: _, ...told } = worst;
    return [told];
  });
}

function endsOf(
  model: Model,
  solution: Solution,
  counted: CountedDraws,
  response: number,
  frequencies: readonly number[],
  tail: number,
  single: number,
  factor: number,
): Ends | undefined {
  const { link } = model.responses[response]!;
  const sums = { low: 0, high: 0, uncertainty: 0, used: 0 };
  for (const f of frequencies) {
    const cell = f * model.linksPerFrequency + link;
    const u = solution.uncertainty[cell]!;
    if (!(u > 0)) continue;
    const expanded = factor * u;
    const [low, high] = [counted.quantile(f, response, tail), counted.quantile(f, response, 1 - tail)];
    sums.low += -expanded - low;
    sums.high += expanded - high;
    sums.uncertainty += u;
    sums.used++;
  }
  if (sums.used === 0) return undefined;
  const uncertainty = sums.uncertainty / sums.used;
  return {
    uncertainty,
    distance: Math.max(Math.abs(sums.low), Math.abs(sums.high)) / sums.used,
    // Frequencies share what is common to them; counting them as one is on the safe side where they share much.
    samplingError: (single * uncertainty) / Math.sqrt(counted.isCommon ? 1 : sums.used),
  };
}

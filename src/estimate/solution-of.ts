import type { Patterns } from '../model/find-patterns.ts';
import type { Model } from '../model/model.ts';
import type { SystematicEffect } from '../model/systematic-effects.ts';
import type { TakeSet } from '../takes/take-set.ts';
import type { BlockSystem } from './factor-block.ts';
import type { ScatterOfUses } from './reading-scatter.ts';
import type { CovarianceBlock, GainEstimate, ReadingUncertainty, Solution } from './solution.ts';
import { LINK_STATUS } from './solution.ts';
import type { Sweep } from './sweep.ts';
import {
  type EffectShifts,
  reachedAlike,
  systematicShifts,
  type VariancePart,
  variancesOfLines,
  withEffects,
} from './systematic-shifts.ts';

/** A variance below this part of the whole is rounding, left by taking the part of the known values away. */
const NO_PART = 1e-12;

/** A gain movement that shifts a link by less than this part is rounding. */
const MOVES = 1e-7;

const statusCode = (status: (typeof LINK_STATUS)[number]) => LINK_STATUS.indexOf(status);

/** What comes to the uncertainty beside the readings' own. */
export interface SolutionParts {
  readonly uses?: ScatterOfUses | undefined;
  readonly effects?: readonly SystematicEffect[] | undefined;
}

/** Turns the last pass into the solution: variances split by source, degrees of freedom, and what has no value taken out. */
export function solutionOf(
  set: TakeSet,
  model: Model,
  patterns: Patterns,
  swept: Sweep,
  reading: ReadingUncertainty,
  { uses, effects = [] }: SolutionParts = {},
): Solution {
  const width = set.frequencies.length;
  const n = model.linksPerFrequency;
  const estimates = Float64Array.from(swept.estimates);
  const uncertainty = new Float64Array(width * n).fill(Number.NaN);
  const dof = new Float64Array(width * n).fill(Number.NaN);
  const status = new Uint8Array(width * n);
  const gainDof = reading.bands.length === 0 ? Number.POSITIVE_INFINITY : sum(reading.bands.map((band) => band.dof));
  const covariance: CovarianceBlock[] = [];
  const shifts = systematicShifts(swept, effects);
  swept.blocks.forEach(({ block, factored }, b) => {
    const ofGains = gainPart(factored.coupling, swept.gains.covariance, n, block.system.gains);
    const fromPriors = priorPart(model, factored.covariance, block.system, n);
    const linkStatus = linkStatuses(patterns, block.pattern, factored.coupling, swept, n);
    for (const { frequencies, reaching } of reachedAlike(block.frequencies, shifts, b)) {
      const scales = Float64Array.from(frequencies, (f) =>
        hasUncertainty(reading, set, f, patterns) ? swept.unitVariance[f]! : Number.NaN,
      );
      const common = withEffects(ofGains, reaching, n);
      covariance.push({ frequencies, scales, matrix: factored.covariance, common, ofGains, reaching });
      frequencies.forEach((f, k) => {
        for (let link = 0; link < n; link++) {
          const cell = f * n + link;
          status[cell] = linkStatus[link]!;
          if (linkStatus[link] === statusCode('open')) {
            estimates[cell] = Number.NaN;
            continue;
          }
          const scale = scales[k]!;
          const total = scale * factored.covariance[link * n + link]!;
          const gain = ofGains === undefined ? 0 : ofGains[link * n + link]!;
          const systematic = variancesOfLines(reaching, link);
          const ofPriors = scale * fromPriors[link]!;
          const whole = total + (common === undefined ? 0 : common[link * n + link]!);
          uncertainty[cell] = Math.sqrt(Math.max(0, whole));
          const readingDof = uses === undefined || Number.isNaN(uses.dof[cell]!) ? reading.dof[f]! : uses.dof[cell]!;
          dof[cell] = effectiveDof(whole, [
            { variance: Math.max(0, total - ofPriors), dof: readingDof },
            { variance: gain, dof: gainDof },
            ...systematic,
          ]);
        }
      });
    }
  });
  const degreesOfFreedom = new Float64Array(width);
  for (let cell = 0; cell < swept.redundancy.length; cell++) {
    const redundancy = swept.redundancy[cell]!;
    if (!Number.isNaN(redundancy)) degreesOfFreedom[cell % width] = degreesOfFreedom[cell % width]! + redundancy;
  }
  return {
    patterns: patterns.patterns,
    patternOf: patterns.patternOf,
    estimates,
    uncertainty,
    dof,
    ...otherUses(uncertainty, dof, uses),
    status,
    residuals: swept.residuals,
    redundancy: swept.redundancy,
    readingUncertainty: reading,
    covariance,
    gains: gainEstimates(model, swept, reading, shifts),
    degreesOfFreedom,
    worstCondition: Math.max(0, ...swept.blocks.map(({ factored }) => factored.condition)),
    fallbacks: swept.blocks.filter(({ factored }) => factored.poor).length,
  };
}

/** The uncertainties for the unit seated again, and on another partner. */
export function otherUses(
  uncertainty: Float64Array,
  dof: Float64Array,
  uses: ScatterOfUses | undefined,
): Pick<Solution, 'reseatUncertainty' | 'reseatDof' | 'partnerUncertainty' | 'partnerDof'> {
  const own = { variance: uncertainty.map((u) => u * u), dof };
  const seating = uses && { variance: uses.seating, dof: uses.seatingDof };
  const reseat = otherUse(own, seating);
  const partner = otherUse(own, uses && { variance: uses.partner, dof: uses.partnerDof }, seating);
  return {
    reseatUncertainty: reseat.uncertainty,
    reseatDof: reseat.dof,
    partnerUncertainty: partner.uncertainty,
    partnerDof: partner.dof,
  };
}

interface AddedVariance {
  readonly variance: Float64Array;
  readonly dof: Float64Array;
}

/**
 * Uncertainty for another use: a fresh draw of some scatter comes on top. NaN where the first of them is not known; a
 * further one counts where it is known. Degrees of freedom by Welch–Satterthwaite.
 */
function otherUse(
  own: AddedVariance,
  added: AddedVariance | undefined,
  also?: AddedVariance,
): { uncertainty: Float64Array; dof: Float64Array } {
  const uncertainty = new Float64Array(own.variance.length).fill(Number.NaN);
  const dof = new Float64Array(own.variance.length).fill(Number.NaN);
  if (added === undefined) return { uncertainty, dof };
  for (let cell = 0; cell < uncertainty.length; cell++) {
    const parts = [own, added, ...(also === undefined || Number.isNaN(also.variance[cell]!) ? [] : [also])];
    const total = parts.reduce((sum, { variance }) => sum + variance[cell]!, 0);
    const spent = parts.reduce((sum, part) => sum + part.variance[cell]! ** 2 / part.dof[cell]!, 0);
    uncertainty[cell] = Math.sqrt(total);
    dof[cell] = spent > 0 ? total ** 2 / spent : Number.POSITIVE_INFINITY;
  }
  return { uncertainty, dof };
}

// A frequency at which nothing was measured has its certificate values, and their uncertainty, all the same.
function hasUncertainty(
  reading: ReadingUncertainty,
  set: TakeSet,
  f: number,
  { patterns, patternOf }: Patterns,
): boolean {
  const take = patterns[patternOf[f]!]!.takes[0];
  return take === undefined || !Number.isNaN(reading.values[take * set.frequencies.length + f]!);
}

/** n × n: coupling · gain covariance · couplingᵀ. */
function gainPart(coupling: Float64Array, gains: Float64Array, n: number, count: number): Float64Array | undefined {
  if (count === 0) return undefined;
  const half = new Float64Array(n * count);
  for (let i = 0; i < n; i++) {
    for (let g = 0; g < count; g++) {
      for (let h = 0; h < count; h++)
        half[i * count + g] = half[i * count + g]! + coupling[i * count + h]! * gains[h * count + g]!;
    }
  }
  const part = new Float64Array(n * n);
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) {
      for (let g = 0; g < count; g++)
        part[i * n + j] = part[i * n + j]! + half[i * count + g]! * coupling[j * count + g]!;
    }
  }
  return part;
}

/** Diagonal of C P C: the variance that known values bring in, on the scale of the block. What is drawn at random is not known. */
function priorPart(
  { links }: Model,
  covariance: Float64Array,
  { priorLinks, priorWeights }: BlockSystem,
  n: number,
): Float64Array {
  const part = new Float64Array(n);
  priorLinks.forEach((prior, k) => {
    if (links[prior]!.prior!.kind === 'random') return;
    for (let i = 0; i < n; i++) part[i] = part[i]! + covariance[i * n + prior]! ** 2 * priorWeights[k]!;
  });
  return part;
}

function linkStatuses(
  patterns: Patterns,
  pattern: number,
  coupling: Float64Array,
  swept: Sweep,
  n: number,
): Uint8Array {
  const { status } = patterns.patterns[pattern]!.separability;
  const codes = Uint8Array.from(status, statusCode);
  const count = swept.gains.values.length;
  for (const movement of swept.gains.movements) {
    for (let link = 0; link < n; link++) {
      let shift = 0;
      for (let g = 0; g < count; g++) shift += coupling[link * count + g]! * movement[g]!;
      if (Math.abs(shift) > MOVES && codes[link] === statusCode('ok')) codes[link] = statusCode('datum');
    }
  }
  return codes;
}

/**
 * Effective degrees of freedom of a variance of which these parts were estimated and the rest is known.
 * Source: JCGM 100:2008, G.4.1 (Welch–Satterthwaite).
 */
export function effectiveDof(total: number, parts: readonly VariancePart[]): number {
  if (Number.isNaN(total)) return Number.NaN;
  let spent = 0;
  for (const { variance, dof } of parts) if (variance > NO_PART * total) spent += variance ** 2 / dof;
  return spent > 0 ? total ** 2 / spent : Number.POSITIVE_INFINITY;
}

function gainEstimates(
  model: Model,
  swept: Sweep,
  reading: ReadingUncertainty,
  effects: readonly EffectShifts[],
): GainEstimate[] {
  const { values, covariance, pinned } = swept.gains;
  return Array.from(values, (value, g) => {
    const systematic = effects.reduce((sum, { effect, gains }) => sum + (effect.line.uncertainty * gains[g]!) ** 2, 0);
    const variance = covariance[g * values.length + g]! + systematic;
    return {
      link: model.linksPerFrequency + g,
      value,
      uncertainty: reading.source === 'none' ? Number.NaN : Math.sqrt(variance),
      status: pinned.includes(g) ? 'datum' : 'ok',
    };
  });
}

function sum(values: readonly number[]): number {
  return values.reduce((total, value) => total + value, 0);
}

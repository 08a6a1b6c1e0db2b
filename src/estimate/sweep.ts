import type { Patterns } from '../model/find-patterns.ts';
import type { Model } from '../model/model.ts';
import type { TakeSet } from '../takes/take-set.ts';
import { type Block, type Blocks, blocksOf } from './blocks.ts';
import { type FactoredBlock, factorBlock, type RankRevealingInverse } from './factor-block.ts';
import { knownPartRemoved, refineLinks } from './refine-links.ts';
import { type SolvedGains, solveGains } from './solve-gains.ts';

/** What one pass over all frequencies gives. L links of each frequency, F frequencies, T takes; layouts as in Solution. */
export interface Sweep {
  readonly blocks: readonly { readonly block: Block; readonly factored: FactoredBlock }[];
  /** Variance (dB²) of weight 1 at each frequency. */
  readonly unitVariance: Float64Array;
  /** F × L. */
  readonly estimates: Float64Array;
  /** T × F. */
  readonly residuals: Float64Array;
  readonly redundancy: Float64Array;
  readonly gains: SolvedGains;
  /** Whether a block was too poorly conditioned for the factor at hand. */
  readonly needsFallback: boolean;
}

/** Above this condition number the normal equations cost more digits than the 1e-9 that is promised leaves room for. */
const REFINED_ABOVE = 1e4;

/**
 * Solves all frequencies: factors each block once, sums what the blocks say of the shared gains, solves the gains, and
 * substitutes back. Cost: blocks × links³ / 3 + readings × (entries of a row)².
 * @param uncertainty T × F in dB; NaN where there is none: such a frequency is solved with equal weights.
 */
export function sweep(
  set: TakeSet,
  model: Model,
  { patterns }: Patterns,
  uncertainty: Float64Array,
  fallback: RankRevealingInverse | undefined,
  onProgress?: (done: number, total: number) => void,
): Sweep {
  const width = set.frequencies.length;
  const n = model.linksPerFrequency;
  const gainCount = model.links.length - n;
  const grouped = blocksOf(set, model, patterns, uncertainty);
  const estimates = new Float64Array(width * n);
  const schur = new Float64Array(gainCount * gainCount);
  const gainSide = new Float64Array(gainCount);
  const gainWeights = new Float64Array(gainCount);
  let done = 0;
  const blocks = grouped.blocks.map((block) => {
    const factored = factorBlock(block.system, fallback);
    for (const f of block.frequencies) {
      const side = rightHandSide(set, model, grouped, block, f, gainSide);
      const border = gainCount === 0 ? undefined : side.slice();
      factored.solve(side);
      estimates.set(side, f * n);
      if (border === undefined) continue;
      const precision = 1 / grouped.unitVariance[f]!;
      block.system.incidence.gain.forEach((gain, r) => {
        if (gain >= 0) gainWeights[gain] = gainWeights[gain]! + block.system.weights[r]! * precision;
      });
      for (let k = 0; k < schur.length; k++) schur[k] = schur[k]! + factored.schur[k]! * precision;
      for (let g = 0; g < gainCount; g++) {
        // Bᵀ M⁻¹ b, with M⁻¹ B at hand as the coupling.
        let sum = 0;
        for (let i = 0; i < n; i++) sum += factored.coupling[i * gainCount + g]! * border[i]!;
        gainSide[g] = gainSide[g]! - sum * precision;
      }
    }
    done += block.frequencies.length;
    onProgress?.(done, width);
    return { block, factored };
  });
  const gains = solveGains(schur, gainSide, gainWeights);
  if (gainCount > 0) substituteGains(estimates, blocks, gains, n);
  for (const { block, factored } of blocks) {
    if (!(factored.condition > REFINED_ABOVE)) continue;
    for (const f of block.frequencies) refineLinks(set, model, block.system, factored, f, gains.values, estimates);
  }
  const residuals = new Float64Array(set.levels.length).fill(Number.NaN);
  const redundancy = new Float64Array(set.levels.length).fill(Number.NaN);
  for (const { block, factored } of blocks) {
    for (const f of block.frequencies) {
      residualsAt(set, model, block, f, estimates, gains, residuals);
      redundancyAt(set, block, f, factored, grouped.unitVariance[f]!, gains, redundancy);
    }
  }
  return {
    blocks,
    unitVariance: grouped.unitVariance,
    estimates,
    residuals,
    redundancy,
    gains,
    needsFallback: fallback === undefined && blocks.some(({ factored }) => factored.poor),
  };
}

/** Xᵀ W y with the known values' share; adds the gains' own part, Zᵀ W y, to `gainSide`. */
function rightHandSide(
  set: TakeSet,
  model: Model,
  { unitVariance }: Blocks,
  { system }: Block,
  f: number,
  gainSide: Float64Array,
): Float64Array {
  const { take, start, link, factor, gain } = system.incidence;
  const side = new Float64Array(system.links);
  for (let r = 0; r < take.length; r++) {
    const weighted = system.weights[r]! * knownPartRemoved(set, model, take[r]!, f);
    for (let i = start[r]!; i < start[r + 1]!; i++) side[link[i]!] = side[link[i]!]! + factor[i]! * weighted;
    const g = gain[r]!;
    if (g >= 0) gainSide[g] = gainSide[g]! + weighted / unitVariance[f]!;
  }
  system.priorLinks.forEach((prior, k) => {
    side[prior] = side[prior]! + system.priorWeights[k]! * model.links[prior]!.prior!.value[f]!;
  });
  return side;
}

function substituteGains(estimates: Float64Array, blocks: Sweep['blocks'], { values }: SolvedGains, n: number): void {
  for (const { block, factored } of blocks) {
    for (const f of block.frequencies) {
      for (let i = 0; i < n; i++) {
        let shift = 0;
        for (let g = 0; g < values.length; g++) shift += factored.coupling[i * values.length + g]! * values[g]!;
        estimates[f * n + i] = estimates[f * n + i]! - shift;
      }
    }
  }
}

function residualsAt(
  set: TakeSet,
  model: Model,
  { system }: Block,
  f: number,
  estimates: Float64Array,
  gains: SolvedGains,
  residuals: Float64Array,
): void {
  const { take, start, link, factor, gain } = system.incidence;
  const width = set.frequencies.length;
  const offset = f * system.links;
  for (let r = 0; r < take.length; r++) {
    let fitted = gain[r]! >= 0 ? gains.values[gain[r]!]! : 0;
    for (let i = start[r]!; i < start[r + 1]!; i++) fitted += factor[i]! * estimates[offset + link[i]!]!;
    residuals[take[r]! * width + f] = knownPartRemoved(set, model, take[r]!, f) - fitted;
  }
}

/** A redundancy below this is rounding: nothing checks the reading. */
const UNCHECKED = 1e-9;

/** Redundancy 1 − leverage, the leverage being weight × variance of the fitted value. */
function redundancyAt(
  set: TakeSet,
  { system }: Block,
  f: number,
  factored: FactoredBlock,
  unitVariance: number,
  gains: SolvedGains,
  redundancy: Float64Array,
): void {
  const { take, start, link, factor, gain } = system.incidence;
  const { covariance, coupling } = factored;
  const n = system.links;
  const width = set.frequencies.length;
  const gainCount = system.gains;
  const direction = new Float64Array(gainCount);
  for (let r = 0; r < take.length; r++) {
    let variance = 0;
    for (let i = start[r]!; i < start[r + 1]!; i++) {
      for (let j = start[r]!; j < start[r + 1]!; j++) {
        variance += factor[i]! * factor[j]! * covariance[link[i]! * n + link[j]!]!;
      }
    }
    if (gainCount > 0) {
      for (let g = 0; g < gainCount; g++) {
        let entry = gain[r]! === g ? 1 : 0;
        for (let i = start[r]!; i < start[r + 1]!; i++) entry -= factor[i]! * coupling[link[i]! * gainCount + g]!;
        direction[g] = entry;
      }
      variance += quadraticForm(gains.covariance, direction) / unitVariance;
    }
    const left = 1 - system.weights[r]! * variance;
    redundancy[take[r]! * width + f] = left < UNCHECKED ? 0 : left;
  }
}

function quadraticForm(matrix: Float64Array, vector: Float64Array): number {
  const n = vector.length;
  let sum = 0;
  for (let i = 0; i < n; i++) for (let j = 0; j < n; j++) sum += vector[i]! * matrix[i * n + j]! * vector[j]!;
  return sum;
}

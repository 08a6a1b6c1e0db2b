import { knownLinks } from '../model/find-patterns.ts';
import type { Model } from '../model/model.ts';
import type { Pattern } from '../model/separability.ts';
import type { TakeSet } from '../takes/take-set.ts';
import type { BlockSystem } from './factor-block.ts';
import { incidenceOf } from './incidence.ts';

/** Frequencies that share one factor: the same readings, and weights that differ at most by a common factor. */
export interface Block {
  readonly pattern: number;
  readonly frequencies: number[];
  readonly system: BlockSystem;
}

/** Blocks of all frequencies, with the variance (dB²) that weight 1 stands for at each frequency; 1 where it is unknown. */
export interface Blocks {
  readonly blocks: readonly Block[];
  readonly unitVariance: Float64Array;
}

/**
 * Groups the frequencies of each pattern by their relative weights.
 * @param uncertainty T × F standard uncertainties in dB; NaN (throughout a frequency) where there is none.
 */
export function blocksOf(set: TakeSet, model: Model, patterns: readonly Pattern[], uncertainty: Float64Array): Blocks {
  const width = set.frequencies.length;
  const unitVariance = new Float64Array(width).fill(1);
  const blocks: Block[] = [];
  patterns.forEach((pattern, p) => {
    const incidence = incidenceOf(model, pattern.takes);
    const restraints = pattern.separability.directions.map((direction) => direction.restraint);
    const own = new Map<number, Block[]>();
    for (const f of pattern.frequencies) {
      const first = uncertainty[(pattern.takes[0] ?? 0) * width + f]!;
      const known = pattern.takes.length > 0 && !Number.isNaN(first);
      if (known) unitVariance[f] = first * first;
      const weights = weightsOf(pattern, uncertainty, width, f, known);
      const priors = priorWeightsOf(model, f, unitVariance[f]!);
      const hash = hashOf(weights, priors.weights);
      const candidates = own.get(hash) ?? [];
      const block = candidates.find(
        ({ system }) => same(system.weights, weights) && same(system.priorWeights, priors.weights),
      );
      if (block !== undefined) {
        block.frequencies.push(f);
        continue;
      }
      const system: BlockSystem = {
        incidence,
        weights,
        priorLinks: priors.links,
        priorWeights: priors.weights,
        restraints,
        links: model.linksPerFrequency,
        gains: model.links.length - model.linksPerFrequency,
      };
      const fresh: Block = { pattern: p, frequencies: [f], system };
      blocks.push(fresh);
      own.set(hash, [...candidates, fresh]);
    }
  });
  return { blocks, unitVariance };
}

function weightsOf(
  pattern: Pattern,
  uncertainty: Float64Array,
  width: number,
  f: number,
  known: boolean,
): Float64Array {
  const weights = new Float64Array(pattern.takes.length).fill(1);
  if (!known) return weights;
  const first = uncertainty[pattern.takes[0]! * width + f]!;
  for (let r = 0; r < weights.length; r++) weights[r] = (first / uncertainty[pattern.takes[r]! * width + f]!) ** 2;
  return weights;
}

function priorWeightsOf(model: Model, f: number, unitVariance: number) {
  const links = knownLinks(model, f);
  const weights = Float64Array.from(links, (link) => unitVariance / model.links[link]!.prior!.uncertainty[f]! ** 2);
  return { links, weights };
}

function hashOf(...parts: readonly Float64Array[]): number {
  let hash = 0x811c9dc5;
  for (const part of parts) {
    const words = new Uint32Array(part.buffer, part.byteOffset, part.length * 2);
    for (let i = 0; i < words.length; i++) hash = Math.imul(hash ^ words[i]!, 0x01000193);
  }
  return hash;
}

function same(a: Float64Array, b: Float64Array): boolean {
  if (a.length !== b.length) return false;
  for (let i = 0; i < a.length; i++) if (a[i] !== b[i]) return false;
  return true;
}

import type { Model } from '../model/model.ts';
import type { TakeSet } from '../takes/take-set.ts';
import type { BlockSystem, FactoredBlock } from './factor-block.ts';

/** Steps shrink by the condition number times rounding; more than a few mean that nothing more is to be gained. */
const MOST_STEPS = 20;
/** A step has to be smaller than this part of the last one, else it is rounding. */
const SHRINKS = 0.5;

/**
 * Takes away what rounding of the normal equations left in the links of one frequency: what the readings, known values and
 * restraints still differ by is solved for again, as long as that helps. Their differences are taken row by row, not from
 * the normal matrix, so that the condition counts once and not twice.
 * Source: corrected seminormal equations, Björck, Numerical Methods for Least Squares Problems, 1996, section 6.6.5.
 * @param gains of the sessions in dB. @param estimates F × L, changed in place.
 */
export function refineLinks(
  set: TakeSet,
  model: Model,
  system: BlockSystem,
  factored: FactoredBlock,
  f: number,
  gains: Float64Array,
  estimates: Float64Array,
): void {
  const own = estimates.subarray(f * system.links, (f + 1) * system.links);
  let last = Number.POSITIVE_INFINITY;
  for (let k = 0; k < MOST_STEPS; k++) {
    const step = remainder(set, model, system, factored, f, gains, own);
    factored.solve(step);
    const size = step.reduce((largest, entry) => Math.max(largest, Math.abs(entry)), 0);
    if (!(size > 0 && size < SHRINKS * last)) return;
    for (let i = 0; i < own.length; i++) own[i] = own[i]! + step[i]!;
    last = size;
  }
}

function remainder(
  set: TakeSet,
  model: Model,
  system: BlockSystem,
  { restraints }: FactoredBlock,
  f: number,
  gains: Float64Array,
  links: Float64Array,
): Float64Array {
  const { take, start, link, factor, gain } = system.incidence;
  const side = new Float64Array(links.length);
  for (let r = 0; r < take.length; r++) {
    let left = knownPartRemoved(set, model, take[r]!, f);
    if (gain[r]! >= 0) left -= gains[gain[r]!]!;
    for (let i = start[r]!; i < start[r + 1]!; i++) left -= factor[i]! * links[link[i]!]!;
    left *= system.weights[r]!;
    for (let i = start[r]!; i < start[r + 1]!; i++) side[link[i]!] = side[link[i]!]! + factor[i]! * left;
  }
  system.priorLinks.forEach((prior, k) => {
    const left = model.links[prior]!.prior!.value[f]! - links[prior]!;
    side[prior] = side[prior]! + system.priorWeights[k]! * left;
  });
  for (const restraint of restraints) {
    const left = restraint.reduce((sum, entry, i) => sum - entry * links[i]!, 0);
    for (let i = 0; i < side.length; i++) side[i] = side[i]! + left * restraint[i]!;
  }
  return side;
}

/** Level of a reading less the exactly known part of its chain. */
export function knownPartRemoved(set: TakeSet, model: Model, take: number, f: number): number {
  const known = model.chains[take]!.known;
  const level = set.levels[take * set.frequencies.length + f]!;
  return known === undefined ? level : level - known[f]!;
}

import { DEFAULT_MODEL_OPTIONS, type ModelOptions } from '../model/model-options.ts';
import type { Design, PlannedSeating } from './design.ts';
import { plannedBench, plannedOptions } from './planned-bench.ts';
import { candidatePairs } from './suggest.ts';

/**
 * As few takes as tell all units apart, one after the other so that each shares a unit with the one before wherever that
 * is possible: the design for those who have no time. How well it tells them is not looked at.
 * @returns undefined where the allowed pairs cannot tell them apart.
 */
export function cheapestSet(
  design: Design,
  fewest: number,
  repeats: number,
  options: ModelOptions = DEFAULT_MODEL_OPTIONS,
): readonly PlannedSeating[] | undefined {
  const modelOptions = plannedOptions(design, options);
  const pairs = candidatePairs(design, modelOptions.model === 'directional', repeats);
  const left = new Set(pairs.filter(({ isNew }) => isNew).map(({ seating }) => seating));
  const chosen: PlannedSeating[] = [];
  const rankWith = (more: readonly PlannedSeating[]) => {
    const seatings = [...design.seatings, ...chosen, ...more];
    if (seatings.length === 0) return 0;
    return plannedBench({ ...design, seatings }, modelOptions).patterns.patterns[0]!.separability.rank;
  };
  let rank = rankWith([]);
  while (chosen.length < fewest) {
    const last = chosen.at(-1);
    const shares = ({ emitter, receiver }: PlannedSeating) =>
      last !== undefined && [last.emitter, last.receiver].some((unit) => unit === emitter || unit === receiver);
    const near = [...left].sort((a, b) => Number(shares(b)) - Number(shares(a)));
    const next = near.find((seating) => rankWith([seating]) > rank);
    if (next === undefined) return undefined;
    chosen.push(next);
    left.delete(next);
    rank++;
  }
  return chosen;
}

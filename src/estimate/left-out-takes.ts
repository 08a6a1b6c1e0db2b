import type { Model } from '../model/model.ts';
import type { TakeSet } from '../takes/take-set.ts';
import type { Solution } from './solution.ts';

/**
 * Adds to a solution what the takes that were left out of it show against it: reading − fitted, where all their links are
 * known. They have no redundancy, as they had no part in the fit.
 */
export function withLeftOutTakes(
  set: TakeSet,
  model: Model,
  solution: Solution,
  without: ReadonlySet<number>,
): Solution {
  const width = set.frequencies.length;
  const n = model.linksPerFrequency;
  const residuals = Float64Array.from(solution.residuals);
  const values = Float64Array.from(solution.readingUncertainty.values);
  const perFrequency = uncertaintyPerFrequency(solution, set);
  for (const t of without) {
    const { links, factors, known } = model.chains[t]!;
    for (let f = 0; f < width; f++) {
      const cell = t * width + f;
      let residual = set.levels[cell]! - (known?.[f] ?? 0);
      links.forEach((link, k) => {
        const value = link < n ? solution.estimates[f * n + link]! : solution.gains[link - n]!.value;
        residual -= factors[k]! * value;
      });
      residuals[cell] = residual;
      if (!Number.isNaN(set.levels[cell]!)) values[cell] = set.uncertainty?.[cell] ?? perFrequency[f]!;
    }
  }
  return { ...solution, residuals, readingUncertainty: { ...solution.readingUncertainty, values } };
}

// Uncertainties that the input does not give are the same for all readings of a frequency.
function uncertaintyPerFrequency({ readingUncertainty: { values } }: Solution, set: TakeSet): Float64Array {
  const width = set.frequencies.length;
  const found = new Float64Array(width).fill(Number.NaN);
  for (let cell = 0; cell < values.length; cell++) {
    if (!Number.isNaN(values[cell]!)) found[cell % width] = values[cell]!;
  }
  return found;
}

import type { Model } from '../model/model.ts';
import type { VarianceShares } from '../numeric/variance-shares.ts';
import type { TakeSet } from '../takes/take-set.ts';
import { readingParts } from './reading-parts.ts';
import { isGiven, type Solution } from './solution.ts';
import { effectiveDof, otherUses } from './solution-of.ts';
import { type VariancePart, variancesOfLines } from './systematic-shifts.ts';

/**
 * Sets the degrees of freedom of links from the parts that repeats, seatings and partners have in their variance, whatever
 * seatings are shared by. Every unit's share is a source of its own.
 * Source: JCGM 100:2008, G.4.1 (Welch–Satterthwaite).
 */
export function withDofOfParts(set: TakeSet, model: Model, solution: Solution): Solution {
  const { scatter } = solution;
  if (scatter === undefined) return solution;
  const n = model.linksPerFrequency;
  const dof = Float64Array.from(solution.dof);
  const partsOf = readingParts(set, model, solution);
  for (const block of solution.covariance) {
    const partsAt = partsOf(block);
    block.frequencies.forEach((f, k) => {
      const level = scatter.levelOf[f];
      if (level === undefined || Number.isNaN(block.scales[k]!)) return;
      for (let link = 0; link < n; link++) {
        const cell = f * n + link;
        if (Number.isNaN(solution.uncertainty[cell]!)) continue;
        const { own, noise, rounding, seatOf, partnerOf } = partsAt(link, f);
        const repeatDof = isGiven(scatter.readingSource) ? Number.POSITIVE_INFINITY : level.repeatDof;
        const repeat = own.variance + noise.variance + rounding.variance;
        dof[cell] = effectiveDof(solution.uncertainty[cell]! ** 2, [
          // Variance without degrees of freedom is rounding: it counts as known.
          { variance: repeat, dof: repeatDof > 0 ? repeatDof : Number.POSITIVE_INFINITY },
          ...shareParts(seatOf, level.seating),
          ...shareParts(partnerOf, level.partner),
          ...variancesOfLines(block.reaching ?? [], link),
        ]);
      }
    });
  }
  return { ...solution, dof, ...otherUses(solution.uncertainty, dof, scatter.uses) };
}

function shareParts(parts: Float64Array, shares: VarianceShares | undefined): VariancePart[] {
  if (shares === undefined) return [];
  return Array.from(parts, (variance, end) => ({ variance, dof: shares.dof[end]! })).filter(
    ({ variance }) => variance > 0,
  );
}

import type { VarianceShares } from '../numeric/variance-shares.ts';
import type { ChainLayout } from './chain-groups.ts';
import { inverseNormal } from './fitted-level.ts';
import type { LevelScatter } from './scatter-of-level.ts';

/**
 * Effective degrees of freedom of each link's variance where repeat, seating and partner variances were estimated: the
 * link's estimate is a weighted sum of chain means, and each variance enters with the squares of the weights.
 * Source: JCGM 100:2008, G.4.1 (Welch–Satterthwaite), every share being a source of its own.
 */
export function dofOfLinks(layout: ChainLayout, scatter: LevelScatter, n: number): Float64Array {
  const { fitted, seating, partner, repeatDof } = scatter;
  const inverse = inverseNormal(layout, fitted.chainWeight, n);
  const parts = layout.groups.map((_, chain) => chainParts(layout, scatter, chain));
  const seatParts = new Float64Array(n);
  const partnerParts = new Float64Array(n);
  return Float64Array.from({ length: n }, (_, link) => {
    seatParts.fill(0);
    partnerParts.fill(0);
    let repeat = 0;
    layout.groups.forEach(({ links, factors, ends }, chain) => {
      const weight = fitted.chainWeight[chain]!;
      if (!(weight > 0)) return;
      let gain = 0;
      for (let k = 0; k < links.length; k++) gain += inverse[link * n + links[k]!]! * factors[k]!;
      const square = (gain * weight) ** 2;
      repeat += square * parts[chain]!.repeat;
      for (const end of ends) {
        seatParts[end] = seatParts[end]! + square * parts[chain]!.seat * (seating?.shares[end] ?? 0);
        partnerParts[end] = partnerParts[end]! + square * (partner?.shares[end] ?? 0);
      }
    });
    const total = repeat + sum(seatParts) + sum(partnerParts);
    const spent =
      (repeatDof > 0 ? repeat ** 2 / repeatDof : 0) + spentBy(seatParts, seating) + spentBy(partnerParts, partner);
    return spent > 0 ? total ** 2 / spent : Number.POSITIVE_INFINITY;
  });
}

/** What repeats add to the variance of a chain's mean in dB², and how often the seating variance stands in it. */
function chainParts(layout: ChainLayout, { fitted }: LevelScatter, chain: number): { repeat: number; seat: number } {
  let repeat = 0;
  let seat = 0;
  for (let s = layout.seatStart[chain]!; s < layout.seatStart[chain + 1]!; s++) {
    if (fitted.seatCount[s] === 0) continue;
    const part = fitted.seatPrecision[s]! / fitted.chainPrecision[chain]!;
    repeat += (part * part) / fitted.seatInformation[s]!;
    seat += part * part;
  }
  return { repeat, seat };
}

function spentBy(parts: Float64Array, shares: VarianceShares | undefined): number {
  if (shares === undefined) return 0;
  return parts.reduce((spent, part, link) => spent + (part > 0 ? part ** 2 / shares.dof[link]! : 0), 0);
}

function sum(values: Float64Array): number {
  return values.reduce((total, value) => total + value, 0);
}

import type { VarianceShares } from '../numeric/variance-shares.ts';
import type { ChainLayout } from './chain-groups.ts';
import { type FittedLevel, inverseNormal } from './fitted-level.ts';

/**
 * Variance of each chain's mean that repeats and seatings explain where it is held against the additive model. Seatings
 * that are shared between chains are mostly taken up by the units' own links, as they move all chains of a unit alike: of
 * those only what the fit leaves counts.
 * With M = I − X(XᵀWX)⁻¹XᵀW and z the part of a shared seating in each chain's mean, that is Σ share (M z)² over the part
 * of the variance that the residual keeps, here 1 − leverage as for everything else.
 * Cost: shared seatings × (chains + links²).
 */
export function knownOfChains(
  layout: ChainLayout,
  fitted: FittedLevel,
  seating: VarianceShares | undefined,
): Float64Array {
  const { groups, shared, seatStart } = layout;
  const { chainPrecision, seatPrecision, seatVariance, chainWeight, leverageFactor } = fitted;
  const known = chainPrecision.map((precision) => (precision > 0 ? 1 / precision : Number.NaN));
  if (seating === undefined || shared.seatings.length === 0) return known;
  const partOf = (seat: number, chain: number) => seatPrecision[seat]! / chainPrecision[chain]!;
  const parts = shared.seatings.map(() => new Map<number, number>());
  groups.forEach((_, chain) => {
    if (!(chainPrecision[chain]! > 0)) return;
    let own = 0;
    for (let seat = seatStart[chain]!; seat < seatStart[chain + 1]!; seat++) {
      const precision = seatPrecision[seat]!;
      if (!(precision > 0)) continue;
      const part = partOf(seat, chain);
      const ofEnds = shared.ownEnds[seat]!.reduce((sum, end) => sum + seating.shares[end]!, 0);
      own += part * part * (ofEnds + Math.max(0, 1 / precision - seatVariance[chain]!));
      for (const s of shared.ofTake[layout.takes[seat]![0]!]!) {
        parts[s]!.set(chain, (parts[s]!.get(chain) ?? 0) + part);
      }
    }
    known[chain] = own;
  });
  const n = 1 + groups.reduce((most, { links }) => Math.max(most, ...links), 0);
  const inverse = inverseNormal(layout, chainWeight, n);
  shared.seatings.forEach(({ response }, s) => {
    const side = new Float64Array(n);
    for (const [chain, part] of parts[s]!) {
      const { links, factors } = groups[chain]!;
      links.forEach((link, k) => {
        side[link] = side[link]! + chainWeight[chain]! * factors[k]! * part;
      });
    }
    const moved = Float64Array.from({ length: n }, (_, i) =>
      side.reduce((sum, value, j) => sum + inverse[i * n + j]! * value, 0),
    );
    groups.forEach(({ links, factors }, chain) => {
      const left = 1 - chainWeight[chain]! * leverageFactor[chain]!;
      if (!(left > 0) || Number.isNaN(known[chain]!)) return;
      const rest = links.reduce((sum, link, k) => sum - factors[k]! * moved[link]!, parts[s]!.get(chain) ?? 0);
      known[chain] = known[chain]! + (seating.shares[response]! * rest * rest) / left;
    });
  });
  return known;
}

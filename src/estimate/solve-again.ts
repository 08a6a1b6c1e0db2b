import type { Model } from '../model/model.ts';
import type { TakeSet } from '../takes/take-set.ts';
import type { Sweep } from './sweep.ts';

/** Values of the known links of one draw, in dB: of link l at frequency f. */
export type KnownValues = (link: number, f: number) => number;

/**
 * Solves other levels with the factors of a sweep: what one factorisation costs is spent once for many draws.
 * @param levels T × F, with a reading wherever the sweep had one.
 * @param estimates F × L, filled.
 */
export function solveAgain(
  set: TakeSet,
  model: Model,
  swept: Sweep,
  levels: Float64Array,
  known: KnownValues,
  estimates: Float64Array,
): void {
  const n = model.linksPerFrequency;
  const width = set.frequencies.length;
  const gainCount = swept.gains.values.length;
  const gainSide = new Float64Array(gainCount);
  const side = new Float64Array(n);
  for (const { block, factored } of swept.blocks) {
    const { incidence, weights, priorLinks, priorWeights } = block.system;
    const { take, start, link, factor, gain } = incidence;
    for (const f of block.frequencies) {
      side.fill(0);
      const precision = 1 / swept.unitVariance[f]!;
      for (let r = 0; r < take.length; r++) {
        const t = take[r]!;
        const exact = model.chains[t]!.known?.[f] ?? 0;
        const weighted = weights[r]! * (levels[t * width + f]! - exact);
        for (let i = start[r]!; i < start[r + 1]!; i++) side[link[i]!] = side[link[i]!]! + factor[i]! * weighted;
        const g = gain[r]!;
        if (g >= 0) gainSide[g] = gainSide[g]! + weighted * precision;
      }
      priorLinks.forEach((prior, k) => {
        side[prior] = side[prior]! + priorWeights[k]! * known(prior, f);
      });
      for (let g = 0; g < gainCount; g++) {
        let sum = 0;
        for (let i = 0; i < n; i++) sum += factored.coupling[i * gainCount + g]! * side[i]!;
        gainSide[g] = gainSide[g]! - sum * precision;
      }
      factored.solve(side);
      estimates.set(side, f * n);
    }
  }
  if (gainCount === 0) return;
  const gains = gainSide.map((_, g) =>
    gainSide.reduce((sum, value, h) => sum + swept.gains.covariance[g * gainCount + h]! * value, 0),
  );
  for (const { block, factored } of swept.blocks) {
    for (const f of block.frequencies) {
      for (let i = 0; i < n; i++) {
        let shift = 0;
        for (let g = 0; g < gainCount; g++) shift += factored.coupling[i * gainCount + g]! * gains[g]!;
        estimates[f * n + i] = estimates[f * n + i]! - shift;
      }
    }
  }
}

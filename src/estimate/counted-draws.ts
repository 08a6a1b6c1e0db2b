import type { Model } from '../model/model.ts';
import type { TakeSet } from '../takes/take-set.ts';
import type { Solution } from './solution.ts';

/** Draws of all responses, counted in cells about the estimates: many draws take no more room than few. */
export interface CountedDraws {
  /** @param estimates F × links of one draw. */
  add(estimates: Float64Array, links: number): void;
  /** Quantile of the draws less the estimate, in dB. */
  quantile(frequency: number, response: number, probability: number): number;
  /** Whether the errors of one frequency are those of the next: gains and systematic effects. */
  readonly isCommon: boolean;
}

const CELLS = 512;
/** Cells reach this many expanded uncertainties to either side. */
const REACH = 2;

export function countedDraws(set: TakeSet, model: Model, solution: Solution, factor: number): CountedDraws {
  const width = set.frequencies.length;
  const count = model.responses.length;
  const n = model.linksPerFrequency;
  const cells = new Uint32Array(width * count * CELLS);
  const reach = new Float64Array(width * count).fill(Number.NaN);
  model.responses.forEach(({ link }, r) => {
    for (let f = 0; f < width; f++) {
      const u = solution.uncertainty[f * n + link]!;
      if (u > 0) reach[f * count + r] = REACH * factor * u;
    }
  });
  return {
    isCommon: solution.gains.length > 0 || solution.covariance.some(({ reaching }) => (reaching?.length ?? 0) > 0),
    add(estimates, links) {
      model.responses.forEach(({ link }, r) => {
        for (let f = 0; f < width; f++) {
          const half = reach[f * count + r]!;
          if (Number.isNaN(half)) continue;
          const error = estimates[f * links + link]! - solution.estimates[f * n + link]!;
          const cell = Math.floor(((error / half + 1) / 2) * CELLS);
          const at = (f * count + r) * CELLS + Math.min(CELLS - 1, Math.max(0, cell));
          cells[at] = cells[at]! + 1;
        }
      });
    },
    quantile(f, r, probability) {
      const from = (f * count + r) * CELLS;
      const own = cells.subarray(from, from + CELLS);
      const wanted = probability * own.reduce((sum, each) => sum + each, 0);
      const half = reach[f * count + r]!;
      let below = 0;
      for (let cell = 0; cell < CELLS; cell++) {
        if (below + own[cell]! >= wanted && own[cell]! > 0) {
          return ((2 * (cell + (wanted - below) / own[cell]!)) / CELLS - 1) * half;
        }
        below += own[cell]!;
      }
      return half;
    },
  };
}

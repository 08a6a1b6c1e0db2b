import { partnerContrasts } from '../estimate/scatter-of-level.ts';
import { chiSquareUpperQuantile } from '../numeric/chi-square.ts';
import type { ScreeningLevels } from './screening-levels.ts';

/** A band in which it is not single units that depend on their partner, but the bench as a whole. */
export interface FailingBand {
  /** Hertz. */
  readonly from: number;
  readonly to: number;
  /** Standard deviation in dB that a typical unit's response shows over its partners, and its lower confidence bound. */
  readonly typical: number;
  readonly low: number;
}

/** Median of χ²(1), and the part of its degrees of freedom that a variance from a median keeps (both recalled from memory). */
const MEDIAN_SQUARE = 0.454936;
const MEDIAN_EFFICIENCY = 0.37;
/** Fewer degrees of freedom than this say nothing of a bench. Common practice, no source. */
const FEWEST_DOF = 4;

/**
 * Bands in which the additive model itself fails: the median of what chains leave over it, so that a single unit does not
 * make a band fail, is surely above what the tolerance would give. Ascending.
 * @param tolerance decibels, for one unit. @param coverage confidence of the bound, all bands taken together.
 */
export function failingBands(
  { bands, layout }: ScreeningLevels,
  { tolerance, coverage }: { readonly tolerance: number; readonly coverage: number },
): FailingBand[] {
  const tail = (1 - coverage) / Math.max(1, bands.length);
  return bands
    .flatMap(({ from, to, scatter }): FailingBand[] => {
      const contrasts = partnerContrasts(layout, scatter.fitted, scatter.seating);
      const dof = MEDIAN_EFFICIENCY * contrasts.reduce((sum, contrast) => sum + contrast.dof, 0);
      if (dof < FEWEST_DOF) return [];
      const variance = median(contrasts.map(({ square }) => square)) / MEDIAN_SQUARE;
      const known = median(contrasts.map((contrast) => contrast.known));
      const least = (variance * dof) / chiSquareUpperQuantile(tail, dof);
      // A chain holds the shares of both its ends.
      const share = (total: number) => Math.sqrt(Math.max(0, total - known) / 2);
      return [{ from, to, typical: share(variance), low: share(least) }];
    })
    .filter(({ low }) => low > tolerance)
    .sort((a, b) => a.from - b.from);
}

function median(values: readonly number[]): number {
  const sorted = Float64Array.from(values).sort();
  return sorted[sorted.length >> 1] ?? 0;
}

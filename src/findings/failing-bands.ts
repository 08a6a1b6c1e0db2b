import type { HoldFinding } from './holds.ts';
import { FAILING_PART, SURELY_FAILING_PART } from './thresholds.ts';

/** A band in which it is not single units that depend on their partner, but most of them. */
export interface FailingBand {
  /** Hertz. */
  readonly from: number;
  readonly to: number;
  /** All units, those of them that show more partner scatter than the tolerance, and those surely above it. */
  readonly units: number;
  readonly aboveTolerance: number;
  readonly broken: number;
}

/**
 * Bands in which the additive model itself fails: most units show more partner scatter than the tolerance, and so many
 * are surely above it that chance does not explain them. A single unit that depends on its partners makes no band fail.
 * Ascending.
 * @param tolerance decibels.
 */
export function failingBands(holds: readonly HoldFinding[], tolerance: number): FailingBand[] {
  const bands = new Map<number, HoldFinding[]>();
  for (const hold of holds) bands.set(hold.from, [...(bands.get(hold.from) ?? []), hold]);
  return [...bands.values()]
    .map(
      (own): FailingBand => ({
        from: own[0]!.from,
        to: own[0]!.to,
        units: own.length,
        // A unit without a figure (NaN) says nothing against the model.
        aboveTolerance: own.filter(({ partner }) => partner > tolerance).length,
        broken: own.filter(({ verdict }) => verdict === 'broken').length,
      }),
    )
    .filter(
      ({ units, aboveTolerance, broken }) =>
        aboveTolerance > FAILING_PART * units && broken > SURELY_FAILING_PART * units && broken > 1,
    )
    .sort((a, b) => a.from - b.from);
}

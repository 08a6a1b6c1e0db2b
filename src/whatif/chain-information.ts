import type { AssumedBand } from './assumed-scatter.ts';

/**
 * What a chain with certain seatings, all for it alone, says. The information on a shift of one of its takes is a + b · left, the least over
 * its seatings, with `left` = 1 − weight × variance of the fitted value.
 */
export interface ChainInformation {
  /** 1 / variance of its mean; 0 without seatings. */
  readonly weight: number;
  readonly a: number;
  readonly b: number;
}

const ROUNDING = 1e-12;

/**
 * The closed form that takes are judged by (see `shiftsOfTakes`), for takes that are still to be made.
 * @param counts takes of each seating.
 */
export function chainInformation(
  counts: readonly number[],
  band: Pick<AssumedBand, 'repeat' | 'reseat' | 'partner'>,
): ChainInformation {
  if (counts.length === 0) return { weight: 0, a: Number.POSITIVE_INFINITY, b: 0 };
  const single = Math.max(ROUNDING, band.repeat ** 2);
  const reseat = band.reseat ** 2;
  const precision = counts.reduce((sum, count) => sum + 1 / (reseat + single / count), 0);
  const spread = 1 + band.partner ** 2 * precision;
  let least = { a: Number.POSITIVE_INFINITY, b: 0 };
  for (const count of new Set(counts)) {
    const h = 1 / (single + count * reseat);
    const part = counts.length === 1 ? 1 : 1 / (reseat + single / count) / precision;
    const a = (count - 1) / (count * single) + (h * (1 - part)) / count;
    const b = (h * part) / (count * spread);
    // Seatings of more takes are checked by their own repeats at least.
    if (a + b / 2 < least.a + least.b / 2) least = { a, b };
  }
  return { weight: 1 / (band.partner ** 2 + 1 / precision), ...least };
}

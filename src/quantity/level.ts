/** A level ratio in decibels, 20 lg of an amplitude ratio. */
export type Decibel = number & { readonly unit: 'dB' };

export const decibel = (value: number): Decibel => value as Decibel;

/** Decibels per neper: 20 / ln 10, so that u(dB) = 8.685889638 · u(relative amplitude) to first order. */
export const DECIBEL_PER_NEPER = 20 / Math.LN10;

/** Level of an amplitude ratio. The ratio must be above 0: 'nothing measured' has no level. */
export function levelOfRatio(ratio: number): Decibel {
  if (!(ratio > 0)) throw new RangeError(`no level for the amplitude ratio ${ratio}`);
  return decibel(20 * Math.log10(ratio));
}

/** Amplitude ratio of a level. */
export function ratioOfLevel(level: Decibel): number {
  return 10 ** (level / 20);
}

/** Level of the mean power of several levels; at least one level is due. */
export function powerMean(levels: readonly Decibel[]): Decibel {
  if (levels.length === 0) throw new RangeError('the power mean of no levels');
  // Relative to the largest, so that very low or high levels neither vanish nor overflow.
  const top = Math.max(...levels);
  const sum = levels.reduce((total, level) => total + 10 ** ((level - top) / 10), 0);
  return decibel(top + 10 * Math.log10(sum / levels.length));
}

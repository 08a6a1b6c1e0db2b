import type { RandomStream } from '../../src/numeric/random.ts';

/** Draws curves over the frequencies: normal, mean 0, variance 1 at each frequency, smooth along log frequency. */
export type CurveSource = (stream: RandomStream) => Float64Array;

/** Nodes lie this part of the kernel's width apart; closer ones change the correlation by less than 1e-4. */
const NODE_SPACING = 0.5;
/** The kernel is cut off at so many widths: there it is below 4e-4 of its top. */
const KERNEL_REACH = 4;

/**
 * White noise at nodes along log frequency, seen through a Gaussian kernel: the correlation of two frequencies d octaves
 * apart is exp(−(d / correlation)²).
 * @param frequencies hertz.
 * @param correlation distance in octaves at which the correlation is 1/e, above 0; 0 for white noise.
 */
export function smoothCurves(frequencies: Float64Array, correlation: number): CurveSource {
  if (correlation === 0) return (stream) => Float64Array.from(frequencies, () => stream.normal());
  const octaves = Float64Array.from(frequencies, (frequency) => Math.log2(frequency / frequencies[0]!));
  // The product of two kernels of width w, d apart, falls off as exp(−d² / 4w²).
  const width = correlation / 2;
  const step = NODE_SPACING * width;
  const reach = Math.ceil(KERNEL_REACH / NODE_SPACING);
  const nodes = Math.floor(octaves.at(-1)! / step) + 2 + 2 * reach;
  const rows = Array.from(octaves, (octave) => {
    const first = Math.floor(octave / step);
    const weights = Array.from({ length: 2 * reach + 2 }, (_, k) =>
      Math.exp(-0.5 * (((first + k - reach) * step - octave) / width) ** 2),
    );
    const norm = Math.hypot(...weights);
    return { first, weights: weights.map((weight) => weight / norm) };
  });
  return (stream) => {
    const white = Float64Array.from({ length: nodes }, () => stream.normal());
    return Float64Array.from(rows, ({ first, weights }) =>
      weights.reduce((sum, weight, k) => sum + weight * white[first + k]!, 0),
    );
  };
}

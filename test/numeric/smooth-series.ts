import type { RandomStream } from '../../src/numeric/random.ts';

/** Normal values of variance 1 whose correlation at distance d is exp(−d² / (2 width²)); independent for width 0. */
export function smoothSeries(stream: RandomStream, count: number, width: number): Float64Array {
  if (width === 0) return Float64Array.from({ length: count }, () => stream.normal());
  // White noise through a Gaussian window of width / √2 has that correlation.
  const reach = Math.ceil(3 * width);
  const window = Float64Array.from({ length: 2 * reach + 1 }, (_, k) => Math.exp(-(((k - reach) / width) ** 2)));
  const size = Math.hypot(...window);
  const noise = Float64Array.from({ length: count + 2 * reach }, () => stream.normal());
  return Float64Array.from(
    { length: count },
    (_, f) => window.reduce((sum, w, k) => sum + w * noise[f + k]!, 0) / size,
  );
}

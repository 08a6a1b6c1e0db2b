import type { Explanation } from './explanations.ts';
import { dot, type WhitenedCurve, whiten } from './whitened-curve.ts';

/** Widths tried, as the distance in octaves from the centre to where half of the height is left. Common practice, no source. */
const HALF_WIDTHS = [1 / 24, 1 / 12, 1 / 8, 1 / 6, 1 / 4, 1 / 3, 1 / 2, 3 / 4];

export interface Bump {
  readonly explanation: Extract<Explanation, { kind: 'local' }>;
  readonly misfit: number;
  readonly curve: Float64Array;
}

/**
 * The bell over log frequency (Gaussian) that fits a deviation best, over all centres and some widths.
 * @param frequencies hertz. Undefined where no bell fits better than nothing.
 */
export function bestBump(curve: WhitenedCurve, frequencies: Float64Array): Bump | undefined {
  const y = whiten(curve, curve.shift);
  const total = dot(y, y);
  const octaves = Float64Array.from(frequencies, Math.log2);
  let best: { gain: number; centre: number; halfWidth: number; height: number; information: number } | undefined;
  for (const halfWidth of HALF_WIDTHS) {
    for (const f of curve.used) {
      const { information, projection } = overlap(curve, octaves, octaves[f]!, halfWidth, y);
      const gain = (projection * projection) / information;
      if (best === undefined || gain > best.gain) {
        best = { gain, centre: octaves[f]!, halfWidth, height: projection / information, information };
      }
    }
  }
  if (best === undefined || !(best.gain > 0)) return undefined;
  const { centre, halfWidth, height, information } = best;
  const misfit = total - best.gain;
  const excess = Math.max(1, misfit / Math.max(1, y.length - 3));
  return {
    explanation: {
      kind: 'local',
      from: 2 ** (centre - halfWidth),
      to: 2 ** (centre + halfWidth),
      centre: 2 ** centre,
      height,
      uncertainty: Math.sqrt(excess / information),
    },
    misfit,
    curve: bell(octaves, centre, halfWidth).map((value) => height * value),
  };
}

/** Squared length of a whitened bell, and its product with the whitened deviation; whitened on the way, as it is tried often. */
function overlap(
  { used, uncertainty, correlation }: WhitenedCurve,
  octaves: Float64Array,
  centre: number,
  halfWidth: number,
  y: Float64Array,
): { information: number; projection: number } {
  const scale = Math.sqrt(1 - correlation * correlation);
  let before = 0;
  let information = 0;
  let projection = 0;
  for (let k = 0; k < used.length; k++) {
    const f = used[k]!;
    const away = (octaves[f]! - centre) / halfWidth;
    // Beyond four half-widths less than 2⁻¹⁶ of the height is left.
    const standardised = away > 4 || away < -4 ? 0 : 2 ** -(away * away) / uncertainty[f]!;
    const innovation = k === 0 ? standardised : (standardised - correlation * before) / scale;
    before = standardised;
    information += innovation * innovation;
    projection += innovation * y[k]!;
  }
  return { information, projection };
}

function bell(octaves: Float64Array, centre: number, halfWidth: number): Float64Array {
  return octaves.map((at) => 2 ** -(((at - centre) / halfWidth) ** 2));
}

import { choleskyInPlace, choleskyInverse } from '../numeric/cholesky.ts';

/** Gains shared by all frequencies, solved from the sum of all Schur complements. G gains; matrices row-major G × G. */
export interface SolvedGains {
  /** Decibels; 0 for a pinned gain. */
  readonly values: Float64Array;
  /** dB²; rows and columns of pinned gains are 0. */
  readonly covariance: Float64Array;
  /** Gains that the takes leave open and that are 0 by convention. */
  readonly pinned: readonly number[];
  /** For each pinned gain, how all gains move when it moves by 1 dB. */
  readonly movements: readonly Float64Array[];
}

/** A pivot below this part of the gain's own weight is rounding: the gain cannot be told from the links and the gains kept. */
const RANK_TOLERANCE = 1e-9;

/**
 * Solves S g = b. Gains are kept from the last to the first, so that where one of several must be called 0 dB it is that
 * of the first-named session.
 * @param ownWeights sum of the weights of each gain's readings, before the links were eliminated: what rounding is
 * measured by.
 */
export function solveGains(schur: Float64Array, rightHandSide: Float64Array, ownWeights: Float64Array): SolvedGains {
  const count = rightHandSide.length;
  const kept: number[] = [];
  let inverse = new Float64Array(0);
  for (let gain = count - 1; gain >= 0; gain--) {
    const candidate = [...kept, gain];
    const pivot = remainingPivot(schur, count, kept, inverse, gain);
    if (!(pivot > RANK_TOLERANCE * ownWeights[gain]!)) continue;
    kept.push(gain);
    inverse = inverseOf(schur, count, candidate);
  }
  const values = new Float64Array(count);
  const covariance = new Float64Array(count * count);
  kept.forEach((a, i) => {
    kept.forEach((b, j) => {
      covariance[a * count + b] = inverse[i * kept.length + j]!;
      values[a] = values[a]! + inverse[i * kept.length + j]! * rightHandSide[b]!;
    });
  });
  const pinned = [...Array(count).keys()].filter((gain) => !kept.includes(gain));
  const movements = pinned.map((gain) => {
    const movement = new Float64Array(count);
    movement[gain] = 1;
    kept.forEach((a) => {
      for (const b of kept) movement[a] = movement[a]! - covariance[a * count + b]! * schur[b * count + gain]!;
    });
    return movement;
  });
  return { values, covariance, pinned, movements };
}

// What is left of a gain's diagonal when the kept gains are eliminated.
function remainingPivot(
  schur: Float64Array,
  count: number,
  kept: readonly number[],
  inverse: Float64Array,
  gain: number,
): number {
  let pivot = schur[gain * count + gain]!;
  kept.forEach((a, i) => {
    kept.forEach((b, j) => {
      pivot -= schur[gain * count + a]! * inverse[i * kept.length + j]! * schur[b * count + gain]!;
    });
  });
  return pivot;
}

function inverseOf(matrix: Float64Array, stride: number, members: readonly number[]): Float64Array<ArrayBuffer> {
  const n = members.length;
  const part = new Float64Array(n * n);
  members.forEach((a, i) => {
    members.forEach((b, j) => {
      part[i * n + j] = matrix[a * stride + b]!;
    });
  });
  const inverse = new Float64Array(n * n);
  if (!choleskyInPlace(part, n)) throw new Error('a gain passed the rank test and still has no positive pivot');
  choleskyInverse(part, n, inverse, new Float64Array(n * n));
  return inverse;
}

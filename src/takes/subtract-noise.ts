import type { Readings, UnusedRow } from '../readings/readings.ts';

/** Below this clearance in dB the noise is half of what was read or more, and what is left is not worth a figure. */
const LEAST_CLEARANCE = 3;
/** Clearances that differ by less are the same: differences of decimals leave the last bits open. */
const SAME_CLEARANCE = 1e-9;

/** What background noise does to a level. */
export interface NoiseCorrection {
  /** Decibels to take off the level as read. */
  readonly correction: number;
  /** By how much the standard uncertainty grows, 1 or more. */
  readonly factor: number;
}

/**
 * Takes the power of background noise off a level that holds both: K = −10 lg(1 − 10^(−D/10)), D being the level as read
 * less that of the noise. With a = 1 / (1 − 10^(−D/10)) the corrected level moves by a dB per dB of the level as read, and
 * by 1 − a per dB of the noise level. The noise level counts as known as well as the level, so that the standard
 * uncertainty grows by √(a² + (a − 1)²): 2.2 at 3 dB, 1.38 at 6 dB, 1.12 at 10 dB, and next to nothing beyond.
 * Source: ISO 3744:2010 and ISO 3741:2010, background noise correction K1 (which these stop at 6 dB and 10 dB of clearance,
 * where a grade of accuracy is claimed); JCGM 100:2008, equation 10; how well the noise is known: common practice, no source.
 */
export function noiseCorrection(clearance: number): NoiseCorrection {
  const share = 10 ** (-clearance / 10);
  const leverage = 1 / (1 - share);
  return { correction: (-10 / Math.LN10) * Math.log1p(-share), factor: Math.hypot(leverage, leverage - 1) };
}

/**
 * The part of `factor` that the noise level alone brings, a − 1: what repeats of corrected levels do not show, as they share
 * the noise level.
 */
export function noiseLevelPart(factor: number): number {
  // From factor² = a² + (a − 1)².
  return (Math.sqrt(2 * factor * factor - 1) - 1) / 2;
}

/** Readings from which the background noise is subtracted. */
export interface NoiseSubtracted {
  readonly readings: Readings;
  /** Their levels as read, in dB. */
  readonly asRead: Float64Array;
  /** `NoiseCorrection.factor` of each reading that is left; absent where no noise is given. */
  readonly factor: Float64Array | undefined;
  readonly unused: readonly UnusedRow[];
  readonly notices: readonly string[];
}

/** Subtracts the noise of each reading that has one; readings with less than 3 dB of clearance become unused. */
export function subtractNoise(readings: Readings): NoiseSubtracted {
  const { noise } = readings;
  if (noise === undefined || noise.every(Number.isNaN)) {
    return { readings, asRead: readings.level, factor: undefined, unused: [], notices: [] };
  }
  const unused: UnusedRow[] = [];
  const keep: number[] = [];
  const levels: number[] = [];
  const factors: number[] = [];
  let corrected = 0;
  let largest = 0;
  for (let i = 0; i < readings.count; i++) {
    const level = readings.level[i]!;
    const clearance = level - noise[i]!;
    if (clearance < LEAST_CLEARANCE - SAME_CLEARANCE) {
      unused.push(unusedRow(readings, i, clearance));
      continue;
    }
    const { correction, factor } = Number.isNaN(clearance) ? { correction: 0, factor: 1 } : noiseCorrection(clearance);
    if (!Number.isNaN(clearance)) corrected++;
    largest = Math.max(largest, correction);
    keep.push(i);
    levels.push(level - correction);
    factors.push(factor);
  }
  const notices =
    corrected === 0
      ? []
      : [
          `Background noise (noise_db) was subtracted from ${corrected} of ${readings.count} readings, at most ${largest.toPrecision(2)} dB.`,
        ];
  const left = only(readings, keep);
  return {
    readings: { ...left, level: Float64Array.from(levels) },
    asRead: left.level,
    factor: Float64Array.from(factors),
    unused,
    notices,
  };
}

function unusedRow({ takes, take, line, noise }: Readings, i: number, clearance: number): UnusedRow {
  const reason =
    clearance <= 0
      ? 'background noise at or above the level: the level is that of the noise'
      : `background noise only ${clearance.toPrecision(2)} dB below the level: under ${LEAST_CLEARANCE} dB, too little is left to subtract it`;
  return {
    file: takes[take[i]!]!.file,
    line: line[i]!,
    column: 'noise_db',
    value: String(Number(noise![i]!.toFixed(6))),
    reason,
  };
}

/** The readings at these indices, in this order. */
export function only(readings: Readings, keep: readonly number[]): Readings {
  const pick = (values: Float64Array | undefined) => values && Float64Array.from(keep, (i) => values[i]!);
  return {
    ...readings,
    count: keep.length,
    take: Int32Array.from(keep, (i) => readings.take[i]!),
    line: Int32Array.from(keep, (i) => readings.line[i]!),
    frequency: Float64Array.from(keep, (i) => readings.frequency[i]!),
    level: Float64Array.from(keep, (i) => readings.level[i]!),
    uncertainty: pick(readings.uncertainty),
    averages: pick(readings.averages),
    coherence: pick(readings.coherence),
    noise: pick(readings.noise),
  };
}

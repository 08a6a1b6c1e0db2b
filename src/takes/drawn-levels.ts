import { gammaDraw } from '../numeric/gamma-draw.ts';
import type { RandomStream } from '../numeric/random.ts';
import type { Readings } from '../readings/readings.ts';
import { averagedReadings } from './averaged-readings.ts';
import { frequencyTable } from './frequency-table.ts';
import { type GatherOptions, withinBand } from './gather-takes.ts';
import { type Spectrum, toOctaveBands, toPointsPerDecade } from './regrid.ts';
import { powerSpectrumError } from './spectral-error.ts';
import { noiseCorrection, subtractNoise } from './subtract-noise.ts';
import type { TakeSet } from './take-set.ts';
import { takeSpectra } from './take-spectra.ts';

/** A clearance from the noise that a draw makes smaller than this counts as this: below it there is no level. */
const LEAST_DRAWN_CLEARANCE = 0.1;

/** Makes levels as they might have been read, by the steps that gathering takes. */
export interface LevelDraws {
  /**
   * Levels of one draw, T × F as in the take set; the same array each time.
   * @param deviation T × F, standard deviation in dB of one reading as it was read; used where the input does not give it.
   */
  draw(stream: RandomStream, deviation: Float64Array): Float64Array;
  /** Readings drawn so far, and how many of them came too close to the noise. */
  readonly counts: { drawn: number; tooClose: number };
}

/**
 * @param readings as they were read, before gathering.
 * @param set what gathering made of them.
 */
export function levelDraws(readings: Readings, options: GatherOptions, set: TakeSet): LevelDraws {
  const inBand = options.band === undefined ? readings : withinBand(readings, options.band, []);
  const { readings: used, asRead } = subtractNoise(averagedReadings(inBand).readings);
  const { order, start } = takeSpectra(used);
  const counts = { drawn: 0, tooClose: 0 };
  const own = used.uncertainty;
  const { noise } = used;
  const gammas = used.averages?.map((n, i) => (isPowerSpectrum(used, i) ? n : Number.NaN));
  const errorOf = (stream: RandomStream, i: number, deviation: number): number => {
    const shape = gammas?.[i] ?? Number.NaN;
    if (Number.isNaN(shape)) return deviation * stream.normal();
    return 10 * Math.log10(gammaDraw(stream, shape) / shape) - powerSpectrumError(shape).bias;
  };
  const levelOf = (stream: RandomStream, i: number, deviation: number): number => {
    counts.drawn++;
    const level = asRead[i]! + errorOf(stream, i, deviation);
    const background = noise?.[i] ?? Number.NaN;
    if (Number.isNaN(background)) return level;
    const clearance = level - background - errorOf(stream, i, deviation);
    if (clearance < LEAST_DRAWN_CLEARANCE) counts.tooClose++;
    return level - noiseCorrection(Math.max(clearance, LEAST_DRAWN_CLEARANCE)).correction;
  };
  const levels = new Float64Array(set.levels.length).fill(Number.NaN);
  const width = set.frequencies.length;
  const deviationOf = (i: number, cellDeviation: number) =>
    own === undefined || Number.isNaN(own[i]!) ? cellDeviation : own[i]!;

  if (options.grid.kind === 'as measured') {
    const { indexOf } = frequencyTable(used.frequency);
    return {
      counts,
      draw(stream, deviation) {
        for (let i = 0; i < used.count; i++) {
          const cell = used.take[i]! * width + indexOf[i]!;
          levels[cell] = levelOf(stream, i, deviationOf(i, deviation[cell]!));
        }
        return levels;
      },
    };
  }
  const grid = options.grid;
  const position = new Map(Array.from(set.frequencies, (frequency, f) => [frequency, f]));
  return {
    counts,
    draw(stream, deviation) {
      for (let t = 0; t < set.takes.length; t++) {
        const members = Array.from(order.subarray(start[t], start[t + 1]));
        const spectrum: Spectrum = {
          frequency: members.map((i) => used.frequency[i]!),
          level: members.map((i) => levelOf(stream, i, deviationOf(i, 0))),
          uncertainty: members.map(() => Number.NaN),
        };
        const made =
          grid.kind === 'octave bands'
            ? toOctaveBands(spectrum, grid.fraction)
            : toPointsPerDecade(spectrum, grid.points);
        made.frequency.forEach((frequency, k) => {
          const f = position.get(frequency);
          if (f === undefined) return;
          const cell = t * width + f;
          // An uncertainty that was pooled belongs to the level on the grid.
          const pooled = own === undefined || Number.isNaN(own[members[0]!]!) ? deviation[cell]! * stream.normal() : 0;
          levels[cell] = made.level[k]! + pooled;
        });
      }
      return levels;
    },
  };
}

function isPowerSpectrum({ averages, coherence, uncertainty }: Readings, i: number): boolean {
  const n = averages?.[i] ?? Number.NaN;
  const isTransfer = coherence !== undefined && !Number.isNaN(coherence[i]!);
  return !Number.isNaN(n) && !isTransfer && uncertainty?.[i] === powerSpectrumError(n).uncertainty;
}
